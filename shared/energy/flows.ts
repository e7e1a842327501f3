import { PIECE } from './layer.ts';
import type { Stretches } from './negatives.ts';
import type { Cursor } from './sums.ts';

/** Import up to this much belongs to the diverter's own control band. */
export const CONTROL_BAND_W = 100;

const HOUR_MS = 3_600_000;

/** How bought heat is told from diverted: against import instant by instant, or by stretches in which there is no sun. */
export type Bought = { import: Cursor } | { dark: Stretches };

/** Sums over the time that all the channels of a figure cover, Wh. */
export interface Flows {
  /** By price step: over the time that the heaters (and import, where it is used) cover. */
  diverted: Float64Array;
  bought: Float64Array;
  /** Time covered by them, ms. */
  coveredMs: number;
  /** Over the time that export covers as well. */
  divertedThen: number;
  exportedThen: number;
  sharedMs: number;
}

/**
 * Walks a day's heaters, import and export together, cut so that each is straight within a stretch: bought heat is
 * min(heater, import beyond 100 W), or all heater energy in the given stretches; the rest is diverted.
 *
 * @param steps instants at which a price changes, the first at or before `from`, ascending
 */
export function flowsOf(
  heaters: readonly Cursor[],
  bought: Bought,
  exported: Cursor | undefined,
  steps: readonly number[],
  from: number,
  to: number,
): Flows {
  const needed = 'import' in bought ? [...heaters, bought.import] : heaters;
  const dark = 'dark' in bought ? bought.dark : [];
  const cuts = cutsOf(steps, dark, from, to);
  const traces = needed.map((cursor) => cursor.trace);
  const index = Int32Array.from(needed, (cursor) => cursor.seek(from));
  const n = needed.length;
  const importAt = 'import' in bought ? n - 1 : n;
  const out = exported?.trace;
  let outAt = exported ? exported.seek(from) : 0;
  const flows: Flows = {
    diverted: new Float64Array(steps.length),
    bought: new Float64Array(steps.length),
    coveredMs: 0,
    divertedThen: 0,
    exportedThen: 0,
    sharedMs: 0,
  };
  let at = from;
  let cut = 0;
  let step = 0;
  let night = 0;
  while (at < to) {
    while (cut < cuts.length && cuts[cut] <= at) cut++;
    let end = cut < cuts.length ? cuts[cut] : to;
    let skip = at;
    for (let k = 0; k < n; k++) {
      const { t0, t1, flags, length } = traces[k];
      let i = index[k];
      while (i < length && (t1[i] <= at || (flags[i] & PIECE.spread) !== 0)) i++;
      index[k] = i;
      if (i >= length || t0[i] >= to) return flows;
      if (t0[i] > at) {
        if (t0[i] > skip) skip = t0[i];
      } else if (t1[i] < end) end = t1[i];
    }
    if (skip > at) {
      at = skip;
      continue;
    }
    let shared = false;
    if (out) {
      const { t0, t1, flags, length } = out;
      while (outAt < length && (t1[outAt] <= at || (flags[outAt] & PIECE.spread) !== 0)) outAt++;
      if (outAt < length) {
        shared = t0[outAt] <= at;
        if (!shared) end = Math.min(end, t0[outAt]);
        else if (t1[outAt] < end) end = t1[outAt];
      }
    }
    let h0 = 0;
    let h1 = 0;
    let i0 = 0;
    let i1 = 0;
    for (let k = 0; k < n; k++) {
      const { t0, t1, v0, v1 } = traces[k];
      const i = index[k];
      let a = v0[i];
      let b = a;
      if (v1[i] !== a) {
        const slope = (v1[i] - a) / (t1[i] - t0[i]);
        b = a + slope * (end - t0[i]);
        a += slope * (at - t0[i]);
      }
      if (k === importAt) {
        i0 = a - CONTROL_BAND_W;
        i1 = b - CONTROL_BAND_W;
      } else {
        h0 += a;
        h1 += b;
      }
    }
    while (step + 1 < steps.length && steps[step + 1] <= at) step++;
    const ms = end - at;
    const mean = (h0 + h1) / 2;
    let boughtMean = 0;
    if (importAt < n) boughtMean = leastMean(h0, h1, i0, i1);
    else {
      while (night < dark.length && dark[night][1] <= at) night++;
      if (night < dark.length && dark[night][0] <= at) boughtMean = mean;
    }
    const divertedWms = (mean - boughtMean) * ms;
    flows.bought[step] += boughtMean * ms;
    flows.diverted[step] += divertedWms;
    flows.coveredMs += ms;
    if (shared && out) {
      const { t0, t1, v0, v1 } = out;
      let a = v0[outAt];
      if (v1[outAt] !== a) a += ((v1[outAt] - a) * ((at + end) / 2 - t0[outAt])) / (t1[outAt] - t0[outAt]);
      flows.exportedThen += a * ms;
      flows.divertedThen += divertedWms;
      flows.sharedMs += ms;
    }
    at = end;
  }
  return flows;
}

/** From W·ms, in which the sums are made, to Wh. */
export function inWh(flows: Flows): Flows {
  return {
    ...flows,
    diverted: flows.diverted.map((x) => x / HOUR_MS),
    bought: flows.bought.map((x) => x / HOUR_MS),
    divertedThen: flows.divertedThen / HOUR_MS,
    exportedThen: flows.exportedThen / HOUR_MS,
  };
}

function cutsOf(steps: readonly number[], dark: Stretches, from: number, to: number): number[] {
  return [...steps, ...dark.flat()].filter((at) => at > from && at < to).sort((a, b) => a - b);
}

/** Mean of min(h, max(i, 0)) for h and i running straight from 0 to 1, h not negative; exact, cut where they cross. */
export function leastMean(h0: number, h1: number, i0: number, i1: number): number {
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
