import { addDays, zoneOf } from '../../../shared/time/zone.ts';

/**
 * The first civil day that a log covers from end to end, else its first day.
 * @param from first instant read, RFC 3339
 * @param to last instant read
 * @returns the day and its bounds in ms, `to` excluded; null where nothing was read
 */
export function firstDaySpan(
  from: string | null,
  to: string | null,
  timeZone: string,
): { date: string; from: number; to: number } | null {
  if (!from || !to) return null;
  const zone = zoneOf(timeZone);
  const first = Date.parse(from);
  const last = Date.parse(to);
  const on = (date: string): { date: string; from: number; to: number } => {
    const { start, end } = zone.dayBounds(date);
    return { date, from: start, to: end };
  };
  const begun = on(zone.civilOf(first));
  // The first stamp of a whole day may lie one interval after midnight.
  if (first <= begun.from + 3_600_000) return begun;
  const next = on(addDays(begun.date, 1));
  return next.to <= last ? next : begun;
}

/**
 * A line through the readings of one day; a missing reading lifts the pencil, never a zero or a bridge.
 * @param points instant in ms and value, `null` where there is a gap
 * @returns the path, and the least and greatest value; an empty path where there is nothing to draw
 */
export function pathOf(
  points: readonly (readonly [number, number | null])[],
  from: number,
  to: number,
  width: number,
  height: number,
): { path: string; low: number; high: number } {
  const values = points.flatMap(([, value]) => (value === null ? [] : [value]));
  if (values.length === 0) return { path: '', low: 0, high: 0 };
  const low = Math.min(...values);
  const high = Math.max(...values);
  const range = high - low || 1;
  let path = '';
  let down = false;
  for (const [at, value] of points) {
    if (value === null) {
      down = false;
      continue;
    }
    const x = (((at - from) / (to - from)) * width).toFixed(1);
    const y = (height - 2 - ((value - low) / range) * (height - 4)).toFixed(1);
    path += `${down ? 'L' : 'M'}${x} ${y}`;
    down = true;
  }
  return { path, low, high };
}
