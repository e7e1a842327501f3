/** Milliseconds in a civil day of 24 hours. */
export const DAY_MS = 86_400_000;

const CIVIL = /^(\d{4})-(\d{2})-(\d{2})$/;

/**
 * Days from 1970-01-01 to a date of the Gregorian calendar.
 * @param year full year
 * @param month 1..12
 * @param day 1..31; not checked against the month, see `isCivil`
 */
export function dayNumber(year: number, month: number, day: number): number {
  // Days from civil, counting years from March so that the leap day comes last.
  const y = month <= 2 ? year - 1 : year;
  const era = Math.floor(y / 400);
  const yearOfEra = y - era * 400;
  const dayOfYear = Math.floor((153 * (month + (month > 2 ? -3 : 9)) + 2) / 5) + day - 1;
  return (
    era * 146_097 + yearOfEra * 365 + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100) + dayOfYear - 719_468
  );
}

/** The number of days in a month of the Gregorian calendar; `month` is 1..12. */
export function daysInMonth(year: number, month: number): number {
  if (month === 2) return year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0) ? 29 : 28;
  return month === 4 || month === 6 || month === 9 || month === 11 ? 30 : 31;
}

/** Whether a text is a date `YYYY-MM-DD` that the calendar has. */
export function isCivil(text: string): boolean {
  const match = CIVIL.exec(text);
  if (!match) return false;
  const month = Number(match[2]);
  const day = Number(match[3]);
  return month >= 1 && month <= 12 && day >= 1 && day <= daysInMonth(Number(match[1]), month);
}

/**
 * Days from 1970-01-01 to a civil date.
 * @param civil `YYYY-MM-DD`
 * @throws RangeError if it is no such date
 */
export function civilDay(civil: string): number {
  if (!isCivil(civil)) throw new RangeError(`"${civil}" is no date of the form YYYY-MM-DD.`);
  return dayNumber(Number(civil.slice(0, 4)), Number(civil.slice(5, 7)), Number(civil.slice(8, 10)));
}

/** The civil date, `YYYY-MM-DD`, so many days after 1970-01-01. */
export function civilOfDay(day: number): string {
  return new Date(day * DAY_MS).toISOString().slice(0, 10);
}

/** The civil date `n` days after `civil` (before, if negative). */
export function addDays(civil: string, n: number): string {
  return civilOfDay(civilDay(civil) + n);
}

/** Days from civil date `from` to civil date `to`; negative if `to` is earlier. */
export function daysBetween(from: string, to: string): number {
  return civilDay(to) - civilDay(from);
}

/** All civil dates from `from` to `to`, both included; empty if `to` is earlier. */
export function civilRange(from: string, to: string): string[] {
  const first = civilDay(from);
  const count = civilDay(to) - first + 1;
  return Array.from({ length: Math.max(0, count) }, (_, i) => civilOfDay(first + i));
}
