import { getPosition } from 'suncalc';
import type { Stretches } from './negatives.ts';

const STEP_MS = 1_800_000;

/** Stretches of [from, to) in which the sun is below the horizon, found to the minute by bisection. */
export function darkness(from: number, to: number, latitude: number, longitude: number): Stretches {
  const up = (at: number) => getPosition(new Date(at), latitude, longitude).altitude > 0;
  const dark: Stretches = [];
  let since = up(from) ? null : from;
  let was = since === null;
  for (let at = from; at < to; at += STEP_MS) {
    const next = Math.min(at + STEP_MS, to);
    const now = up(next);
    if (now === was) continue;
    let low = at;
    let high = next;
    while (high - low > 60_000) {
      const middle = (low + high) / 2;
      if (up(middle) === was) low = middle;
      else high = middle;
    }
    if (!now) since = high;
    else if (since !== null) {
      dark.push([since, high]);
      since = null;
    }
    was = now;
  }
  if (since !== null) dark.push([since, to]);
  return dark;
}

/** Stretches put in order and joined where they touch. */
export function union(stretches: Stretches): Stretches {
  const out: Stretches = [];
  for (const [a, b] of [...stretches].sort((x, y) => x[0] - y[0])) {
    const last = out[out.length - 1];
    if (last && a <= last[1]) last[1] = Math.max(last[1], b);
    else out.push([a, b]);
  }
  return out;
}
