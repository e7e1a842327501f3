import { DAYS_OF_WEEK, type Tariff } from '../api/property.ts';
import type { Zone } from '../time/zone.ts';

/** Entries with a date from which they hold: the one in force on a civil date; the first also holds before its own. */
export function inForce<T extends { from?: string }>(entries: readonly T[], date: string): T | null {
  let found: T | null = entries[0] ?? null;
  for (const entry of entries) if ((entry.from ?? '') <= date) found = entry;
  return found;
}

export type Price = 'importPerKwh' | 'exportPerKwh';

/**
 * Price over a stretch of time as steps: instants at which it changes within [from, to), with the price from there.
 * A window's clock is the civil one of the zone, or its standard time all the year (many meters ignore daylight saving).
 */
export function priceSteps(
  tariff: Tariff,
  price: Price,
  zone: Zone,
  from: number,
  to: number,
): { at: number; price: number }[] {
  const windows = (tariff.windows ?? []).filter((window) => window[price] !== undefined);
  if (!windows.length) return [{ at: from, price: tariff[price] }];
  const standard = standardOffset(zone, from);
  const steps: { at: number; price: number }[] = [];
  const cuts = new Set<number>([from]);
  const HALF_HOUR = 60_000;
  for (let at = Math.ceil(from / HALF_HOUR) * HALF_HOUR; at < to; at += HALF_HOUR) cuts.add(at);
  for (const at of cuts) {
    let now = tariff[price];
    for (const window of windows) {
      const local = new Date(at + (window.clock === 'standard' ? standard : zone.offsetAt(at)));
      const minute = local.getUTCHours() * 60 + local.getUTCMinutes();
      const start = minutes(window.start);
      const end = minutes(window.end);
      const wraps = end <= start;
      const inside = wraps ? minute >= start || minute < end : minute >= start && minute < end;
      if (!inside) continue;
      // A window over midnight belongs to the day on which it began.
      const began = wraps && minute < end ? (local.getUTCDay() + 6) % 7 : local.getUTCDay();
      if (window.days.includes(DAYS_OF_WEEK[(began + 6) % 7])) now = window[price] ?? now;
    }
    if (!steps.length || steps[steps.length - 1].price !== now) steps.push({ at, price: now });
  }
  return steps;
}

function minutes(clock: string): number {
  const [hours, mins] = clock.split(':').map(Number);
  return hours * 60 + mins;
}

/** The zone's offset without daylight saving: the lesser of those in January and July of the year. */
function standardOffset(zone: Zone, at: number): number {
  const year = new Date(at).getUTCFullYear();
  return Math.min(zone.offsetAt(Date.UTC(year, 0, 15)), zone.offsetAt(Date.UTC(year, 6, 15)));
}
