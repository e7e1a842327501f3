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
/** A burst of impossible values is at most so long; what stays away longer is another state of the sensor. */
const BURST_MS = 30 * 60_000;

/** Whether a temperature can only be a sensor's fault, judged by itself. */
export function isFaultValue(value: number): boolean {
  return value === ABSENT_C || value < OPEN_BELOW_C || value > SHORT_ABOVE_C;
}

export interface Kept {
  /** The instants kept, with a free slot before and after; `null` where all were kept. */
  t: Float64Array | null;
  n: number;
  dropped: number;
  /** The instant of the first value that was dropped, NaN if none. */
  at: number;
}

/**
 * Leaves fault values out of a temperature series: −127, open and short circuit; 85.0 exactly when its neighbours are
 * elsewhere; values that jump away and back faster than water can.
 *
 * @param t instants in ms, ascending
 * @param v °C, packed in place
 */
export function dropFaults(t: Float64Array, v: Float64Array, n: number): Kept {
  let first = 0;
  while (first < n && !suspect(t, v, n, first, first - 1)) first++;
  if (first === n) return { t: null, n, dropped: 0, at: NaN };
  const kept = new Float64Array(n + 2);
  kept.set(t.subarray(0, first), 1);
  let size = first;
  let at = NaN;
  for (let i = first; i < n; i++) {
    const last = size - 1;
    const lastAt = kept[size];
    if (isFaultValue(v[i]) || isolated(t, v, n, i, last, lastAt)) {
      if (at !== at) at = t[i];
      continue;
    }
    kept[size + 1] = t[i];
    v[size++] = v[i];
  }
  return { t: kept, n: size, dropped: n - size, at };
}

/** A quick look, which most values pass: nothing odd about this one against the one before. */
function suspect(t: Float64Array, v: Float64Array, n: number, i: number, before: number): boolean {
  const value = v[i];
  if (value === POWER_ON_C || isFaultValue(value)) return true;
  return before >= 0 && jumps(value - v[before], t[i] - t[before]) && isolated(t, v, n, i, before, t[before]);
}

function jumps(kelvin: number, ms: number): boolean {
  return Math.abs(kelvin) > ISOLATED_K + (IMPOSSIBLE_K_PER_MINUTE * ms) / 60_000;
}

/** @param last index of the last value kept (at `lastAt`), −1 if none */
function isolated(t: Float64Array, v: Float64Array, n: number, i: number, last: number, lastAt: number): boolean {
  if (v[i] === POWER_ON_C) {
    let next = i + 1;
    while (next < n && (isFaultValue(v[next]) || v[next] === POWER_ON_C)) next++;
    const offBefore = last >= 0 ? Math.abs(v[last] - v[i]) > ISOLATED_K : null;
    const offAfter = next < n ? Math.abs(v[next] - v[i]) > ISOLATED_K : null;
    if (offBefore === null && offAfter === null) return false;
    return offBefore !== false && offAfter !== false;
  }
  if (last < 0 || !jumps(v[i] - v[last], t[i] - lastAt)) return false;
  for (let next = i + 1; next < n && t[next] - t[i] <= BURST_MS; next++) {
    if (isFaultValue(v[next]) || !jumps(v[next] - v[i], t[next] - t[next - 1])) continue;
    if (!jumps(v[next] - v[last], t[next] - lastAt)) return true;
  }
  // At long steps the next reading alone decides.
  const next = i + 1;
  return (
    next < n &&
    t[next] - t[i] > BURST_MS &&
    jumps(v[next] - v[i], t[next] - t[i]) &&
    !jumps(v[next] - v[last], t[next] - lastAt)
  );
}
