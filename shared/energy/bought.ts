import { getPosition } from 'suncalc';
import type { Cursor } from './sums.ts';
import { together } from './sums.ts';

/** Import up to this much belongs to the diverter's own control band. */
export const CONTROL_BAND_W = 100;
/** Longest step at which import and heater can be set against each other by instant. */
export const FINE_SECONDS = 300;

const HOUR_MS = 3_600_000;

/**
 * Heat made with bought power where import is logged finely: the integral of min(heater, import beyond 100 W) over the
 * time that both cover.
 *
 * @returns Wh, `null` where they never cover the same time
 */
export function boughtByImport(heaters: readonly Cursor[], imported: Cursor, from: number, to: number): number | null {
  let sum = 0;
  let any = false;
  together([...heaters, imported], from, to, (a, b, starts, ends) => {
    any = true;
    const last = heaters.length;
    let h0 = 0;
    let h1 = 0;
    for (let k = 0; k < last; k++) {
      h0 += starts[k];
      h1 += ends[k];
    }
    sum += (leastMean(h0, h1, starts[last] - CONTROL_BAND_W, ends[last] - CONTROL_BAND_W) * (b - a)) / HOUR_MS;
  });
  return any ? sum : null;
}

/** Mean of min(h, max(i, 0)) for h and i running straight from 0 to 1, h not negative; exact, cut where they cross. */
function leastMean(h0: number, h1: number, i0: number, i1: number): number {
  if (i0 <= 0 && i1 <= 0) return 0;
  if (h0 <= i0 && h1 <= i1) return (h0 + h1) / 2;
  if (i0 >= 0 && i1 >= 0 && i0 <= h0 && i1 <= h1) return (i0 + i1) / 2;
  const cuts = [0, crossing(i0, i1), crossing(h0 - i0, h1 - i1), 1].filter((c): c is number => c !== null);
  cuts.sort((a, b) => a - b);
  const at = (x: number) => Math.max(0, Math.min(h0 + (h1 - h0) * x, i0 + (i1 - i0) * x));
  let sum = 0;
  for (let k = 1; k < cuts.length; k++) sum += ((at(cuts[k - 1]) + at(cuts[k])) / 2) * (cuts[k] - cuts[k - 1]);
  return sum;
}

function crossing(a: number, b: number): number | null {
  return a > 0 !== b > 0 && a !== b ? a / (a - b) : null;
}

/** Stretches of [from, to) in which the sun is below the horizon, found to the minute by bisection. */
export function darkness(from: number, to: number, latitude: number, longitude: number): [number, number][] {
  const up = (at: number) => getPosition(new Date(at), latitude, longitude).altitude > 0;
  const dark: [number, number][] = [];
  const STEP = HOUR_MS / 2;
  let since = up(from) ? null : from;
  let was = since === null;
  for (let at = from; at < to; at += STEP) {
    const next = Math.min(at + STEP, to);
    const now = up(next);
    if (now !== was) {
      let lo = at;
      let hi = next;
      while (hi - lo > 60_000) {
        const mid = (lo + hi) / 2;
        if (up(mid) === was) lo = mid;
        else hi = mid;
      }
      if (now) {
        if (since !== null) dark.push([since, hi]);
        since = null;
      } else since = hi;
      was = now;
    }
  }
  if (since !== null) dark.push([since, to]);
  return dark;
}
