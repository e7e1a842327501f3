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
  let covered = 0;
  let assumed = 0;
  for (let i = cursor.seek(from); i < length && t0[i] < to; i++) {
    const a = t0[i] < from ? from : t0[i];
    const b = t1[i] > to ? to : t1[i];
    const dt = b - a;
    let twice = v0[i] + v1[i];
    if (dt !== t1[i] - t0[i] && v0[i] !== v1[i])
      twice = 2 * v0[i] + ((v1[i] - v0[i]) / (t1[i] - t0[i])) * (a + b - 2 * t0[i]);
    if (flags[i] === 0) {
      total += twice * dt;
      covered += dt;
    } else if (flags[i] & PIECE.spread) spread += twice * dt;
    else {
      total += twice * dt;
      covered += dt;
      assumed += dt;
    }
  }
  const twiceHour = 2 * MS_PER_HOUR;
  return {
    total: total / twiceHour,
    spread: spread / twiceHour,
    any: covered > 0,
    coveredMs: covered,
    assumedMs: assumed,
  };
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

/** The least value of a trace in [from, to), `null` where nothing covers it. */
export function leastOf(cursor: Cursor, from: number, to: number): number | null {
  const { t0, t1, v0, v1, length } = cursor.trace;
  let least = Infinity;
  for (let i = cursor.seek(from); i < length && t0[i] < to; i++) {
    const slope = (v1[i] - v0[i]) / (t1[i] - t0[i]);
    least = Math.min(
      least,
      t0[i] < from ? v0[i] + slope * (from - t0[i]) : v0[i],
      t1[i] > to ? v0[i] + slope * (to - t0[i]) : v1[i],
    );
  }
  return least === Infinity ? null : least;
}

/** The value of a trace at an instant, `null` where nothing covers it. A value at a piece's very end counts. */
export function valueAt(cursor: Cursor, instant: number): number | null {
  const { t0, t1, v0, v1, length } = cursor.trace;
  const i = cursor.seek(instant - 1e-3);
  if (i >= length || t0[i] > instant) return null;
  if (instant >= t1[i]) return v1[i];
  return v0[i] + ((v1[i] - v0[i]) * (instant - t0[i])) / (t1[i] - t0[i]);
}
