import type { Home } from './home.ts';

/** A battery behind the meter, which comes before the diverter. */
export class Battery {
  private held: number;
  private readonly full: number;
  constructor(private readonly home: Home) {
    this.full = (home.battery?.kwh ?? 0) * 1000;
    this.held = this.full / 2;
  }
  /** Power taken (+) or given (−) for a step, W: it takes surplus first and covers the household's load, nine tenths come back. */
  step(loadLessPanels: number, seconds: number): number {
    if (!this.home.battery) return 0;
    const limit = this.home.battery.kw * 1000;
    const hours = seconds / 3600;
    if (loadLessPanels < 0) {
      const watts = Math.min(limit, -loadLessPanels, (this.full - this.held) / hours / 0.95);
      this.held += watts * hours * 0.95;
      return watts;
    }
    const watts = Math.min(limit, loadLessPanels, (this.held * 0.95) / hours);
    this.held -= (watts * hours) / 0.95;
    return -watts;
  }
}
