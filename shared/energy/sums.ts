import { PIECE, type Trace } from './layer.ts';

const MS_PER_HOUR = 3_600_000;

/** A trace with the place last looked at: looking a little further on is quick, elsewhere a binary search. */
export class Cursor {
  private at = 0;
  constructor(readonly trace: Trace) {}

  /** Index of the first piece with `t1 > from`. */
  seek(from: number): number {
    const { t1, length } = this.trace;
    let lo = 0;
    let hi = length;
    if (this.at < length && t1[this.at] <= from) lo = this.at;
    else hi = this.at;
    let step = 1;
    if (lo > 0) {
      while (lo + step < length && t1[lo + step] <= from) step *= 2;
      hi = Math.min(length, lo + step);
    }
    while (lo < hi) {
      const mid = (lo + hi) >> 1;
      if (t1[mid] <= from) lo = mid + 1;
      else hi = mid;
    }
    this.at = lo;
    return lo;
  }
}

export interface Sum {
  /** W·h (or m³ for a volumetric trace) over the covered part. */
  total: number;
  /** From register steps over six hours, apart: of totals only. */
  spread: number;
  /** Whether anything was covered at all: an empty sum is no data, not zero. */
  any: boolean;
  coveredMs: number;
  assumedMs: number;
}

/** The integral of a trace over [from, to), clipping pieces at the edges. */
export function integrate(cursor: Cursor, from: number, to: number): Sum {
  const { t0, t1, v0, v1, flags, length } = cursor.trace;
  let total = 0;
  let spread = 0;
  let any = false;
  let covered = 0;
  let assumed = 0;
  for (let i = cursor.seek(from); i < length && t0[i] < to; i++) {
    const a = t0[i] < from ? from : t0[i];
    const b = t1[i] > to ? to : t1[i];
    const dt = b - a;
    let mean = (v0[i] + v1[i]) / 2;
    if (dt !== t1[i] - t0[i] && v0[i] !== v1[i]) {
      const slope = (v1[i] - v0[i]) / (t1[i] - t0[i]);
      mean = v0[i] + slope * ((a + b) / 2 - t0[i]);
    }
    const part = (mean * dt) / MS_PER_HOUR;
    if (flags[i] & PIECE.spread) spread += part;
    else {
      any = true;
      total += part;
      covered += dt;
      if (flags[i] & PIECE.assumed) assumed += dt;
    }
  }
  return { total, spread, any, coveredMs: covered, assumedMs: assumed };
}

/** The integral of pieces from index `first` on over [from, to), in W·ms (or as the unit of the values has it). */
export function integralOf(p: PiecesLike, first: number, from: number, to: number): number {
  const { t0, t1, v0, v1, length } = p;
  let sum = 0;
  for (let i = first; i < length && t0[i] < to; i++) {
    const a = Math.max(t0[i], from);
    const b = Math.min(t1[i], to);
    const slope = (v1[i] - v0[i]) / (t1[i] - t0[i]);
    sum += (v0[i] + slope * ((a + b) / 2 - t0[i])) * (b - a);
  }
  return sum;
}

type PiecesLike = Pick<Trace, 't0' | 't1' | 'v0' | 'v1' | 'length'>;

/** The straight piece of every trace over a stretch in which none of them bends. */
export type Stretch = (from: number, to: number, starts: Float64Array, ends: Float64Array) => void;

/**
 * Walks the time in [from, to) that all traces cover (spread steps left out), cut so that each is straight within a
 * stretch.
 */
export function together(cursors: readonly Cursor[], from: number, to: number, each: Stretch): void {
  const n = cursors.length;
  const index = cursors.map((c) => c.seek(from));
  const starts = new Float64Array(n);
  const ends = new Float64Array(n);
  let at = from;
  while (at < to) {
    let end = to;
    let skipTo = at;
    for (let k = 0; k < n; k++) {
      const { t0, t1, flags, length } = cursors[k].trace;
      let i = index[k];
      while (i < length && (t1[i] <= at || flags[i] & PIECE.spread)) i++;
      index[k] = i;
      if (i >= length) return;
      if (t0[i] > at) skipTo = Math.max(skipTo, t0[i]);
      else if (t1[i] < end) end = t1[i];
    }
    if (skipTo > at) {
      at = skipTo;
      continue;
    }
    for (let k = 0; k < n; k++) {
      const { t0, t1, v0, v1 } = cursors[k].trace;
      const i = index[k];
      if (v0[i] === v1[i]) {
        starts[k] = v0[i];
        ends[k] = v0[i];
      } else {
        const slope = (v1[i] - v0[i]) / (t1[i] - t0[i]);
        starts[k] = at === t0[i] ? v0[i] : v0[i] + slope * (at - t0[i]);
        ends[k] = end === t1[i] ? v1[i] : v0[i] + slope * (end - t0[i]);
      }
    }
    each(at, end, starts, ends);
    at = end;
  }
}

/** The value of a trace at an instant, `null` where nothing covers it. A value at a piece's very end counts. */
export function valueAt(cursor: Cursor, instant: number): number | null {
  const { t0, t1, v0, v1, length } = cursor.trace;
  const i = cursor.seek(instant - 1e-3);
  if (i >= length || t0[i] > instant) return null;
  if (instant >= t1[i]) return v1[i];
  return v0[i] + ((v1[i] - v0[i]) * (instant - t0[i])) / (t1[i] - t0[i]);
}
