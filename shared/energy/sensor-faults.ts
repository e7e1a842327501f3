/** What an absent 1-wire thermometer reads through the common open driver. */
const ABSENT_C = -127;
/** The power-on value of the common 1-wire thermometer (register 0x0550 / 16). */
const POWER_ON_C = 85;
/** Below and above these a thermistor is open or short; no domestic store is there (from memory). */
const OPEN_BELOW_C = -30;
const SHORT_ABOVE_C = 120;
/** A power-on value is isolated when its neighbours are further away than this. */
const ISOLATED_K = 5;
/** 3 kW on 200 l is 12.9 K/h; a hundred times that is no water. Kelvin per minute, with ISOLATED_K to spare. */
const IMPOSSIBLE_K_PER_MINUTE = 5;

/** Whether a temperature can only be a sensor's fault, judged by itself. */
export function isFaultValue(value: number): boolean {
  return value === ABSENT_C || value < OPEN_BELOW_C || value > SHORT_ABOVE_C;
}

export interface Kept {
  n: number;
  dropped: number;
  /** The instant of the first value that was dropped, NaN if none. */
  at: number;
}

/**
 * Leaves fault values out of a temperature series, in place: −127, open and short circuit; 85.0 exactly when its
 * neighbours are elsewhere; a single value that jumps away and back faster than water can.
 *
 * @param t instants in ms, ascending
 * @param v °C
 */
export function dropFaults(t: Float64Array, v: Float64Array, n: number): Kept {
  let kept = 0;
  let at = NaN;
  for (let i = 0; i < n; i++) {
    if (isFaultValue(v[i]) || isolated(t, v, n, i, kept)) {
      if (at !== at) at = t[i];
      continue;
    }
    t[kept] = t[i];
    v[kept++] = v[i];
  }
  return { n: kept, dropped: n - kept, at };
}

function isolated(t: Float64Array, v: Float64Array, n: number, i: number, kept: number): boolean {
  const jump = (a: number, b: number, from: number, to: number) =>
    Math.abs(a - b) > ISOLATED_K + (IMPOSSIBLE_K_PER_MINUTE * Math.abs(to - from)) / 60_000;
  let next = i + 1;
  while (next < n && (isFaultValue(v[next]) || (v[next] === v[i] && v[i] === POWER_ON_C))) next++;
  const before = kept > 0 ? kept - 1 : -1;
  if (v[i] === POWER_ON_C) {
    const offBefore = before >= 0 ? Math.abs(v[before] - v[i]) > ISOLATED_K : null;
    const offAfter = next < n ? Math.abs(v[next] - v[i]) > ISOLATED_K : null;
    if (offBefore === null && offAfter === null) return false;
    return offBefore !== false && offAfter !== false;
  }
  if (before < 0 || next >= n) return false;
  return (
    jump(v[i], v[before], t[before], t[i]) &&
    jump(v[i], v[next], t[i], t[next]) &&
    !jump(v[before], v[next], t[before], t[next])
  );
}
