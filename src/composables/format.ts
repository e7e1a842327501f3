import type { FigureName } from '../../shared/api/day.ts';

const NBSP = '\u00a0';
/** Shown for what is not known; never a zero. */
export const UNKNOWN = 'not known';
/** The same in a table. */
export const NO_VALUE = '–';

/** The interface is in English: the reader’s own English where there is one, for numbers and dates alike. */
export function localeOf(languages: readonly string[] = globalThis.navigator?.languages ?? []): string {
  return languages.find((tag) => /^en\b/i.test(tag)) ?? 'en-GB';
}

const numbers = new Map<string, Intl.NumberFormat>();

function numberFormat(options: Intl.NumberFormatOptions): Intl.NumberFormat {
  const locale = localeOf();
  const key = locale + JSON.stringify(options);
  let format = numbers.get(key);
  if (!format) numbers.set(key, (format = new Intl.NumberFormat(locale, options)));
  return format;
}

/** Three figures or so: 0.42, 4.21, 42.1, 421. */
export function digitsFor(value: number): number {
  const size = Math.abs(value);
  if (size >= 99.95) return 0;
  if (size === 0) return 0;
  return size >= 9.995 ? 1 : 2;
}

/** A number in the reader’s way of writing; `digits` after the mark, else as many as its size deserves. */
export function number(value: number, digits = digitsFor(value)): string {
  const text = numberFormat({ minimumFractionDigits: digits, maximumFractionDigits: digits }).format(value);
  // A rounded nothing has no sign.
  return /^[-−][0.,\s]*$/.test(text) ? text.slice(1) : text;
}

/** A number with its unit, not broken over lines. */
export function withUnit(value: number | null, unit: string, digits?: number): string {
  return value === null ? UNKNOWN : `${number(value, digits)}${NBSP}${unit}`;
}

/** Whole per cent, with a decimal below ten; a share is 0 to 1. */
export function percent(share: number): string {
  const value = share * 100;
  return `${number(value, value > 0 && value < 9.95 ? 1 : 0)}${NBSP}%`;
}

export function money(value: number, currency: string | null): string {
  if (!currency) return number(value, 2);
  const text = numberFormat({ style: 'currency', currency }).format(value);
  return /[1-9]/.test(text) ? text : text.replace(/^[-−]/, '');
}

const UNITS: Partial<Record<FigureName, string>> = {
  litresAt40: 'litres',
  gasDisplacedM3: 'm³',
  fuelMeasuredM3: 'm³',
  fuelDisplacedLitres: 'litres',
  co2SavedKg: 'kg',
};
const MONEY: ReadonlySet<FigureName> = new Set(['netSaving', 'missedSunValue']);
const SHARES: ReadonlySet<FigureName> = new Set(['surplusCaught', 'solarFraction']);

export const isMoney = (figure: FigureName): boolean => MONEY.has(figure);
export const isShare = (figure: FigureName): boolean => SHARES.has(figure);

/** The unit that a figure is shown in; money carries its own sign. */
export function unitOf(figure: FigureName): string {
  if (MONEY.has(figure)) return '';
  if (SHARES.has(figure)) return '%';
  return UNITS[figure] ?? 'kWh';
}

/** A figure as it is read: value and unit apart, so that they can be set apart. */
export interface Shown {
  value: string;
  unit: string;
}

export function shown(figure: FigureName, value: number, currency: string | null): Shown {
  if (MONEY.has(figure)) return { value: money(value, currency), unit: '' };
  if (SHARES.has(figure)) return { value: percent(value).replace(`${NBSP}%`, ''), unit: '%' };
  const digits = figure === 'litresAt40' ? 0 : undefined;
  return { value: number(value, digits), unit: unitOf(figure) };
}

/** The same as one text; `not known` where it is null. */
export function said(figure: FigureName, value: number | null, currency: string | null): string {
  if (value === null) return UNKNOWN;
  const { value: text, unit } = shown(figure, value, currency);
  return unit ? `${text}${NBSP}${unit}` : text;
}

const dates = new Map<string, Intl.DateTimeFormat>();

function dateFormat(options: Intl.DateTimeFormatOptions): Intl.DateTimeFormat {
  const locale = localeOf();
  const key = locale + JSON.stringify(options);
  let format = dates.get(key);
  if (!format) dates.set(key, (format = new Intl.DateTimeFormat(locale, { hourCycle: 'h23', ...options })));
  return format;
}

const DATE_STYLES = {
  /** Mon */
  weekday: { weekday: 'short' },
  /** 23 */
  day: { day: 'numeric' },
  /** Mon 23 */
  weekdayDay: { weekday: 'short', day: 'numeric' },
  /** Mon 23 Nov */
  weekdayShort: { weekday: 'short', day: 'numeric', month: 'short' },
  /** 23 Nov */
  short: { day: 'numeric', month: 'short' },
  /** 23 November 2026 */
  long: { day: 'numeric', month: 'long', year: 'numeric' },
  /** Monday, 23 November 2026 */
  full: { weekday: 'long', day: 'numeric', month: 'long', year: 'numeric' },
  /** Monday 23 November */
  spoken: { weekday: 'long', day: 'numeric', month: 'long' },
  /** Nov */
  month: { month: 'short' },
  /** November 2026 */
  monthYear: { month: 'long', year: 'numeric' },
} as const satisfies Record<string, Intl.DateTimeFormatOptions>;

/** A civil date `YYYY-MM-DD`, which belongs to no zone, in words. */
export function civil(date: string, style: keyof typeof DATE_STYLES = 'long'): string {
  return dateFormat({ ...DATE_STYLES[style], timeZone: 'UTC' }).format(Date.parse(`${date}T00:00Z`));
}

/** From one civil date to another, without saying twice what they share. */
export function civilSpan(from: string, to: string): string {
  return dateFormat({ day: 'numeric', month: 'short', year: 'numeric', timeZone: 'UTC' }).formatRange(
    Date.parse(`${from}T00:00Z`),
    Date.parse(`${to}T00:00Z`),
  );
}

/** The clock time of an instant in a zone, 00:00 to 23:59. */
export function clock(instant: number, timeZone: string): string {
  return dateFormat({ hour: '2-digit', minute: '2-digit', timeZone }).format(instant);
}

export function dateAndClock(instant: number, timeZone: string): string {
  return dateFormat({
    weekday: 'short',
    day: 'numeric',
    month: 'short',
    hour: '2-digit',
    minute: '2-digit',
    timeZone,
  }).format(instant);
}

export function temperature(value: number | null): string {
  return value === null ? UNKNOWN : `${number(value, 0)}${NBSP}°C`;
}

/** "1 day", "7 days". */
export function counted(n: number, one: string, many = `${one}s`): string {
  return `${number(n, 0)} ${n === 1 ? one : many}`;
}
