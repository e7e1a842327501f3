import type { Trace } from './layer.ts';

/** A meter's idle jitter: below this a negative value is nothing. */
const SMALL_W = 20;
const SMALL_SHARE = 0.01;

export interface Cleaned {
  trace: Trace;
  /** Pieces whose small negative values count as zero, and pieces left out because of larger ones. */
  zeroed: number;
  unknown: number;
}

/**
 * A trace for figures of energies that cannot be negative: a small negative (under 20 W, or 1 % of the highest value
 * given) counts as zero; a larger one makes its time unknown.
 */
export function withoutNegatives(trace: Trace): Cleaned {
  const { t0, t1, v0, v1, flags, length } = trace;
  let high = 0;
  let any = false;
  for (let i = 0; i < length; i++) {
    if (v0[i] < 0 || v1[i] < 0) any = true;
    if (v0[i] > high) high = v0[i];
  }
  if (!any) return { trace, zeroed: 0, unknown: 0 };
  const least = -Math.max(SMALL_W, SMALL_SHARE * high);
  const copy: Trace = {
    ...trace,
    t0: t0.slice(0, length),
    t1: t1.slice(0, length),
    v0: v0.slice(0, length),
    v1: v1.slice(0, length),
    flags: flags.slice(0, length),
    length: 0,
  };
  let zeroed = 0;
  let unknown = 0;
  for (let i = 0; i < length; i++) {
    if (v0[i] < least || v1[i] < least) {
      unknown++;
      continue;
    }
    if (v0[i] < 0 || v1[i] < 0) zeroed++;
    const at = copy.length++;
    copy.t0[at] = t0[i];
    copy.t1[at] = t1[i];
    copy.v0[at] = Math.max(v0[i], 0);
    copy.v1[at] = Math.max(v1[i], 0);
    copy.flags[at] = flags[i];
  }
  return { trace: copy, zeroed, unknown };
}
