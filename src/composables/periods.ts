import { addDays, civilDay, isCivil } from '../../shared/time/civil.ts';

/** Monday is 1, Sunday 7. */
export function weekdayOf(date: string): number {
  return ((civilDay(date) + 3) % 7) + 1;
}

/** The Monday on or before a civil date. */
export function mondayOf(date: string): string {
  return addDays(date, 1 - weekdayOf(date));
}

/**
 * The Monday of the week to open with: the last one that was logged up to its Thursday, so that a Monday morning shows
 * the week that ended and not one of a few hours. Where there is no earlier week, the one there is.
 */
export function weekToOpen(firstDay: string, lastDay: string): string {
  const monday = mondayOf(lastDay);
  const before = addDays(monday, -7);
  return lastDay < addDays(monday, 3) && firstDay <= addDays(before, 3) ? before : monday;
}

/** The ISO 8601 week of a civil date, `YYYY-Www`. Its year is that of the week’s Thursday. */
export function isoWeek(date: string): string {
  const thursday = addDays(mondayOf(date), 3);
  const year = thursday.slice(0, 4);
  const week = Math.floor((civilDay(thursday) - civilDay(`${year}-01-01`)) / 7) + 1;
  return `${year}-W${String(week).padStart(2, '0')}`;
}

/** The Monday of an ISO week `YYYY-Www`, or null if there is no such week. */
export function mondayOfWeek(week: string): string | null {
  const match = /^(\d{4})-W(\d{2})$/.exec(week);
  if (!match) return null;
  // 4 January lies in week 1.
  const monday = addDays(mondayOf(`${match[1]}-01-04`), (Number(match[2]) - 1) * 7);
  return isoWeek(monday) === week ? monday : null;
}

/** First and last day of a month `YYYY-MM`, or null. */
export function monthSpan(month: string): { from: string; to: string } | null {
  if (!isCivil(`${month}-01`)) return null;
  return { from: `${month}-01`, to: addDays(`${addMonths(month, 1)}-01`, -1) };
}

/** The month `n` after `YYYY-MM`. */
export function addMonths(month: string, n: number): string {
  const at = Number(month.slice(0, 4)) * 12 + Number(month.slice(5, 7)) - 1 + n;
  return `${String(Math.floor(at / 12)).padStart(4, '0')}-${String((at % 12) + 1).padStart(2, '0')}`;
}

/** A year as asked for in an address, or null. */
export function yearSpan(year: string): { from: string; to: string } | null {
  return /^[12]\d{3}$/.test(year) ? { from: `${year}-01-01`, to: `${year}-12-31` } : null;
}
