/** Beyond so many different steps a series is irregular and further new ones are counted by the minute. */
const MAX_STEPS = 20_000;

/** Counts the steps between neighbouring readings of one column, for their median. */
export class StepCounter {
  private readonly counts = new Map<number, number>();
  private last = NaN;
  private step = 0;
  private run = 0;

  /** Takes the instant of the next reading; instants go one way. */
  add(instant: number): void {
    const step = instant - this.last;
    this.last = instant;
    if (step === this.step) this.run++;
    else if (step === step) {
      this.flush();
      this.step = step;
      this.run = 1;
    }
  }

  /** Takes `count` readings more, each `step` after the one before. */
  addRun(step: number, count: number): void {
    this.last += step * count;
    if (step === this.step) this.run += count;
    else {
      this.flush();
      this.step = step;
      this.run = count;
    }
  }

  private flush(): void {
    if (this.run === 0) return;
    let step = Math.abs(this.step);
    // Whole seconds are what loggers mean; below one second the step stays as it is.
    if (step >= 1000) step = Math.round(step / 1000) * 1000;
    if (this.counts.size >= MAX_STEPS && !this.counts.has(step)) step = Math.round(step / 60_000) * 60_000;
    this.counts.set(step, (this.counts.get(step) ?? 0) + this.run);
    this.run = 0;
  }

  /** The median step in seconds (the lower of two middle ones); 0 if there was none. */
  medianSeconds(): number {
    this.flush();
    const steps = [...this.counts].sort(([a], [b]) => a - b);
    const total = steps.reduce((sum, [, count]) => sum + count, 0);
    let seen = 0;
    for (const [step, count] of steps) {
      seen += count;
      if (seen * 2 >= total) return step / 1000;
    }
    return 0;
  }
}
