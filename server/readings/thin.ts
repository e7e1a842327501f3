export type Point = [ms: number, value: number | null];

/**
 * Thins a line to a number of points without losing its extremes: the span is cut into equal parts, of each of which
 * the lowest and the highest value stay, at their own instants. A gap stays a gap. Takes little memory for any
 * number of values, which come in order of time.
 */
export class Thinner {
  private exact: Point[] | null = [];
  private parts: Part[] = [];
  private readonly width: number;
  private part: Part | null = null;
  private partEnd = -Infinity;

  /** @param points how many at most come out of the span, two or more */
  constructor(
    private readonly from: number,
    to: number,
    private readonly points: number,
  ) {
    this.width = Math.max(1, (to - from) / Math.max(1, Math.floor(points / 2)));
  }

  add(ms: number, value: number): void {
    const { exact } = this;
    if (exact) {
      if (exact.length < this.points) {
        exact.push([ms, value]);
        return;
      }
      this.spill(exact);
    }
    if (ms >= this.partEnd) this.open(ms);
    const part = this.part as Part;
    if (!(value >= part.min)) {
      part.min = value;
      part.minAt = ms;
    }
    if (!(value <= part.max)) {
      part.max = value;
      part.maxAt = ms;
    }
  }

  /** Nothing is known from this instant on until the next value. */
  gap(ms: number): void {
    const { exact } = this;
    if (exact) {
      if (exact.length < this.points) {
        exact.push([ms, null]);
        return;
      }
      this.spill(exact);
    }
    if (ms >= this.partEnd) this.open(ms);
    const part = this.part as Part;
    if (part.gapAt !== part.gapAt) part.gapAt = ms;
  }

  result(): Point[] {
    if (this.exact) return this.exact;
    let { parts } = this;
    // Gaps may make it too many points: neighbours are put together until it is not.
    for (let width = this.width * 2; ; width *= 2) {
      const line = parts.flatMap(pointsOf);
      if (line.length <= this.points || parts.length < 2) return line.slice(0, this.points);
      parts = joined(parts, this.from, width);
    }
  }

  private spill(exact: Point[]): void {
    this.exact = null;
    for (const [ms, value] of exact) {
      if (value === null) this.gap(ms);
      else this.add(ms, value);
    }
  }

  private open(ms: number): void {
    const index = Math.floor((ms - this.from) / this.width);
    this.part = newPart(this.from + index * this.width);
    this.partEnd = this.from + (index + 1) * this.width;
    this.parts.push(this.part);
  }
}

interface Part {
  from: number;
  min: number;
  minAt: number;
  max: number;
  maxAt: number;
  gapAt: number;
}

const newPart = (from: number): Part => ({ from, min: NaN, minAt: 0, max: NaN, maxAt: 0, gapAt: NaN });

function joined(parts: readonly Part[], from: number, width: number): Part[] {
  const out: Part[] = [];
  let index = NaN;
  for (const part of parts) {
    const own = Math.floor((part.from - from) / width);
    if (own !== index) {
      index = own;
      out.push({ ...part });
      continue;
    }
    const into = out[out.length - 1];
    if (!(into.min <= part.min) && part.min === part.min) {
      into.min = part.min;
      into.minAt = part.minAt;
    }
    if (!(into.max >= part.max) && part.max === part.max) {
      into.max = part.max;
      into.maxAt = part.maxAt;
    }
    if (into.gapAt !== into.gapAt) into.gapAt = part.gapAt;
  }
  return out;
}

function pointsOf({ min, minAt, max, maxAt, gapAt }: Part): Point[] {
  const points: Point[] = [];
  if (min === min) {
    points.push([minAt, min]);
    if (maxAt !== minAt) points.push([maxAt, max]);
  }
  if (gapAt === gapAt) points.push([gapAt, null]);
  return points.sort((a, b) => a[0] - b[0]);
}
