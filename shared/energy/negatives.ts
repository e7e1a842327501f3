import type { Trace } from './layer.ts';

/** A meter's idle jitter: below this a negative value is nothing. */
const SMALL_W = 20;
const SMALL_SHARE = 0.01;
const DAY_MS = 86_400_000;

/** Stretches [from, to) that follow one another. */
export type Stretches = [from: number, to: number][];

export interface Cleaned {
  trace: Trace;
  /** Where small negative values count as zero, and where larger ones leave the time unknown. */
  zeroed: Stretches;
  unknown: Stretches;
}

/**
 * A trace for figures of energies that cannot be negative: a small negative (under 20 W, or 1 % of the highest value of
 * that UTC day) counts as zero; a larger one makes its time unknown.
 */
export function withoutNegatives(trace: Trace): Cleaned {
  const { t0, v0, v1, length } = trace;
  let any = false;
  for (let i = 0; i < length; i++)
    if (v0[i] < 0 || v1[i] < 0) {
      any = true;
      break;
    }
  const zeroed: Stretches = [];
  const unknown: Stretches = [];
  if (!any) return { trace, zeroed, unknown };
  const copy: Trace = {
    ...trace,
    t0: new Float64Array(length),
    t1: new Float64Array(length),
    v0: new Float64Array(length),
    v1: new Float64Array(length),
    flags: new Uint8Array(length),
    length: 0,
  };
  for (let first = 0; first < length;) {
    const dayEnds = (Math.floor(t0[first] / DAY_MS) + 1) * DAY_MS;
    let next = first;
    let high = 0;
    for (; next < length && t0[next] < dayEnds; next++) if (v0[next] > high) high = v0[next];
    const least = -Math.max(trace.volumetric ? 0 : SMALL_W, SMALL_SHARE * high);
    clean(trace, copy, first, next, least, zeroed, unknown);
    first = next;
  }
  return { trace: copy, zeroed, unknown };
}

function clean(
  { t0, t1, v0, v1, flags }: Trace,
  copy: Trace,
  first: number,
  next: number,
  least: number,
  zeroed: Stretches,
  unknown: Stretches,
): void {
  for (let i = first; i < next; i++) {
    const low = Math.min(v0[i], v1[i]);
    if (low < least) {
      stretch(unknown, t0[i], t1[i]);
      continue;
    }
    if (low < 0) stretch(zeroed, t0[i], t1[i]);
    const at = copy.length++;
    copy.t0[at] = t0[i];
    copy.t1[at] = t1[i];
    copy.v0[at] = v0[i] > 0 ? v0[i] : 0;
    copy.v1[at] = v1[i] > 0 ? v1[i] : 0;
    copy.flags[at] = flags[i];
  }
}

function stretch(list: Stretches, from: number, to: number): void {
  const last = list[list.length - 1];
  if (last && last[1] === from) last[1] = to;
  else list.push([from, to]);
}

/** Milliseconds of [from, to) that stretches cover. */
export function coveredBy(stretches: Stretches, from: number, to: number): number {
  let ms = 0;
  for (const [a, b] of stretches) if (a < to && b > from) ms += Math.min(b, to) - Math.max(a, from);
  return ms;
}
