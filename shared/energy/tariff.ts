import { DAYS_OF_WEEK, type Tariff } from '../api/property.ts';
import { DAY_MS, type Zone } from '../time/zone.ts';

/** Entries with a date from which they hold: the one in force on a civil date; the first also holds before its own. */
export function inForce<T extends { from?: string }>(entries: readonly T[], date: string): T | null {
  let found: T | null = entries[0] ?? null;
  for (const entry of entries) if ((entry.from ?? '') <= date) found = entry;
  return found;
}

/** Prices that hold from an instant on, until the next step. */
export interface PriceStep {
  at: number;
  importPerKwh: number;
  exportPerKwh: number;
}

type Window = NonNullable<Tariff['windows']>[number];

/**
 * Prices over a stretch of time: steps at `from` and at each instant at which a window begins or ends. A window's clock
 * is the civil one of the zone, or its standard time all the year (many meters ignore daylight saving). Of windows that
 * overlap the later in the list holds.
 */
export function priceSteps(tariff: Tariff, zone: Zone, from: number, to: number): PriceStep[] {
  const windows = tariff.windows ?? [];
  const steps: PriceStep[] = [];
  for (const at of changes(windows, zone, from, to)) {
    const { importPerKwh, exportPerKwh } = pricesAt(tariff, windows, zone, at);
    const last = steps[steps.length - 1];
    if (last?.importPerKwh === importPerKwh && last.exportPerKwh === exportPerKwh) continue;
    steps.push({ at, importPerKwh, exportPerKwh });
  }
  return steps;
}

/** `from`, and the instants in (from, to) at which a window's clock shows its start or end, or changes. */
function changes(windows: readonly Window[], zone: Zone, from: number, to: number): number[] {
  const found = new Set<number>([from]);
  if (!windows.length) return [from];
  const standard = standardOffset(zone, from);
  for (let span = zone.spanAt(from); span.to < to; span = zone.spanAt(span.to)) found.add(span.to);
  const first = Math.floor((from + zone.offsetAt(from)) / DAY_MS) - 1;
  const last = Math.floor((to + zone.offsetAt(to)) / DAY_MS) + 1;
  for (const { start, end, clock } of windows)
    for (let day = first; day <= last; day++)
      for (const time of [start, end]) {
        const local = day * DAY_MS + minutes(time) * 60_000;
        const instants = clock === 'standard' ? [local - standard] : zone.localToUtc(local);
        for (const at of instants) if (at > from && at < to) found.add(at);
      }
  return [...found].sort((a, b) => a - b);
}

function pricesAt(tariff: Tariff, windows: readonly Window[], zone: Zone, at: number): Omit<PriceStep, 'at'> {
  let { importPerKwh, exportPerKwh } = tariff;
  for (const window of windows) {
    if (!isInside(window, at + (window.clock === 'standard' ? standardOffset(zone, at) : zone.offsetAt(at)))) continue;
    importPerKwh = window.importPerKwh ?? importPerKwh;
    exportPerKwh = window.exportPerKwh ?? exportPerKwh;
  }
  return { importPerKwh, exportPerKwh };
}

function isInside(window: Window, localMs: number): boolean {
  const local = new Date(localMs);
  const minute = local.getUTCHours() * 60 + local.getUTCMinutes();
  const start = minutes(window.start);
  const end = minutes(window.end);
  const wraps = end <= start;
  const inside = wraps ? minute >= start || minute < end : minute >= start && minute < end;
  // A window over midnight belongs to the day on which it began.
  const weekday = (local.getUTCDay() + 6) % 7;
  const began = wraps && minute < end ? (weekday + 6) % 7 : weekday;
  return inside && window.days.includes(DAYS_OF_WEEK[began]);
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
