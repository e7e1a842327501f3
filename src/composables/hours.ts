import { civilDay, DAY_MS } from '../../shared/time/civil.ts';
import { zoneOf } from '../../shared/time/zone.ts';

/** Readings as the API gives them: instant in ms, value, null for a gap. */
export type Points = readonly (readonly [number, number | null])[];

export interface Hour {
  from: number;
  to: number;
}

const HOUR_MS = 3_600_000;

/** The hours of a civil day as they pass: 23, 24 or 25 of them. */
export function hoursOf(date: string, timeZone: string): Hour[] {
  const { start, end } = zoneOf(timeZone).dayBounds(date);
  const hours: Hour[] = [];
  for (let from = start; from < end; from += HOUR_MS) hours.push({ from, to: Math.min(end, from + HOUR_MS) });
  return hours;
}

/**
 * Instants at which the clocks of a zone show whole multiples of `step` minutes, within a span of one civil day; an
 * hour that clocks show twice gives two.
 */
export function clockTicks(date: string, timeZone: string, step: number, from: number, to: number): number[] {
  const zone = zoneOf(timeZone);
  const midnight = civilDay(date) * DAY_MS;
  const ticks: number[] = [];
  for (let minute = 0; minute <= 1440; minute += step) {
    ticks.push(...zone.localToUtc(midnight + minute * 60_000).filter((at) => at >= from && at <= to));
  }
  return ticks.sort((a, b) => a - b);
}

/** Minutes between ticks so that a span of so many ms carries about `wanted` of them. */
export function tickStep(span: number, wanted: number): number {
  const minutes = span / 60_000 / wanted;
  return [5, 10, 15, 30, 60, 120, 180, 360].find((step) => step >= minutes) ?? 360;
}

/**
 * The mean of points over a span by trapezoids between neighbours; nothing is bridged over a gap.
 * @returns the mean, and the part of the span that is covered; null where nothing is
 */
export function meanOver(points: Points, { from, to }: Hour): { mean: number; covered: number } | null {
  let area = 0;
  let time = 0;
  for (let i = 1; i < points.length; i++) {
    const [t0, v0] = points[i - 1];
    const [t1, v1] = points[i];
    if (v0 === null || v1 === null || t1 <= from || t0 >= to || t1 <= t0) continue;
    const a = Math.max(t0, from);
    const b = Math.min(t1, to);
    const at = (t: number): number => v0 + ((v1 - v0) * (t - t0)) / (t1 - t0);
    area += ((at(a) + at(b)) / 2) * (b - a);
    time += b - a;
  }
  return time > 0 ? { mean: area / time, covered: time / (to - from) } : null;
}

/** The value at an instant, straight between the neighbours, or held from the one before; null within a gap. */
export function valueAt(points: Points, at: number, hold = false): number | null {
  let low = 0;
  let high = points.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (points[middle][0] <= at) low = middle + 1;
    else high = middle;
  }
  const before = points[low - 1];
  if (!before || before[1] === null) return null;
  if (before[0] === at || hold) return before[1];
  const after = points[low];
  if (!after || after[1] === null) return null;
  return before[1] + ((after[1] - before[1]) * (at - before[0])) / (after[0] - before[0]);
}
