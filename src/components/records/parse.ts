/** What a person typed, understood; or why it was not, in words for beside the field. */
export type Parsed<T> = { ok: true; value: T } | { ok: false; message: string };

export interface NumberRule {
  min: number;
  max: number;
  /** Unit as shown beside the field; also accepted behind the number. */
  unit?: string;
  /** Other ways people write the unit, lower case. */
  units?: readonly string[];
  whole?: boolean;
}

const fail = (message: string): { ok: false; message: string } => ({ ok: false, message });
const BLANKS = /[\s\u00a0\u2007\u2009\u202f]+/g;

/** Every way a bare number can be meant: with decimal point, decimal comma, grouped thousands. */
function readings(text: string): number[] {
  if (!/^[+-]?[\d.,’' ]*\d[\d.,’' ]*$/.test(text)) return [];
  const found = new Set<number>();
  const add = (pattern: RegExp, group: RegExp | null, decimal: string): void => {
    if (!pattern.test(text)) return;
    const bare = group ? text.replace(group, '') : text;
    found.add(Number(decimal === '.' ? bare : bare.replace(decimal, '.')));
  };
  add(/^[+-]?(\d+\.?\d*|\.\d+)$/, null, '.');
  add(/^[+-]?(\d+,?\d*|,\d+)$/, null, ',');
  add(/^[+-]?[1-9]\d{0,2}([,’' ]\d{3})+(\.\d*)?$/, /[,’' ]/g, '.');
  add(/^[+-]?[1-9]\d{0,2}([.’' ]\d{3})+,\d*$/, /[.’' ]/g, ',');
  add(/^[+-]?[1-9]\d{0,2}(\.\d{3}){2,}$/, /\./g, '.');
  return [...found].filter(Number.isFinite);
}

const shown = (value: number): string => String(Number(value.toPrecision(12)));

function bounds(rule: NumberRule): string {
  const unit = rule.unit ? ` ${rule.unit}` : '';
  return `from ${shown(rule.min)} to ${shown(rule.max)}${unit}`;
}

/**
 * A number as people write it: `1,234.5`, `1 234,5`, `0,15`, `.5`, `210 litres`.
 * One comma before three digits can mean two numbers; the one within the bounds is taken, and if both are, it is asked.
 * @param text as typed
 * @param rule bounds in the field's unit
 */
export function parseNumber(text: string, rule: NumberRule): Parsed<number> {
  let bare = text.trim().replace(BLANKS, ' ').replace(/[−–]/g, '-').toLowerCase();
  const names = [rule.unit?.toLowerCase(), ...(rule.units ?? [])].filter((name): name is string => Boolean(name));
  const unit = names.sort((a, b) => b.length - a.length).find((name) => bare.endsWith(name));
  if (unit) bare = bare.slice(0, -unit.length).trim();
  const all = readings(bare);
  if (all.length === 0) return fail(`“${text.trim()}” is not a number: write it in figures, ${bounds(rule)}.`);
  const fits = all.filter((value) => value >= rule.min && value <= rule.max);
  if (fits.length === 0) return fail(`${shown(all[0])} is out of range: ${bounds(rule)}.`);
  if (fits.length > 1)
    return fail(
      `“${text.trim()}” can mean ${fits.map(shown).join(' or ')}: write it without grouping and with a point.`,
    );
  if (rule.whole && !Number.isInteger(fits[0])) return fail(`Write a whole number, ${bounds(rule)}.`);
  return { ok: true, value: fits[0] };
}

/**
 * A share as a percentage: `85`, `85 %`, `85,5%` and `0.855` all mean the same kind of thing.
 * Without a % sign a number up to 1.5 is taken as the share itself.
 * @param text as typed
 * @param min least share
 * @param max greatest share
 * @returns the share
 */
export function parseShare(text: string, min: number, max: number): Parsed<number> {
  const percent = /%\s*$/.test(text);
  const wide = parseNumber(text, { min: -1e9, max: 1e9, unit: '%' });
  if (!wide.ok) return fail(`“${text.trim()}” is not a percentage: write for example 85 %.`);
  const share = percent || wide.value > 1.5 ? Number((wide.value / 100).toPrecision(12)) : wide.value;
  if (share < min || share > max)
    return fail(`${shown(share * 100)} % is out of range: from ${shown(min * 100)} to ${shown(max * 100)} %.`);
  return { ok: true, value: share };
}

const MINOR = /\s*(p|pence|penny|c|ct|cts|cent|cents|¢|öre|øre)\s*(\/\s*kwh|per\s+kwh)?$/i;
const MAJOR = /^\s*([£$€]|[a-z]{3}\s)|\s*([£$€]|[a-z]{3})\s*(\/\s*kwh|per\s+kwh)?$/gi;

/**
 * A price per kWh: `0.245`, `0,245`, `£0.245`, `24.5p`, `24,5 ct/kWh`.
 * @param text as typed
 * @returns in the currency's main unit per kWh
 */
export function parsePrice(text: string): Parsed<number> {
  const minor = MINOR.test(text);
  const bare = minor
    ? text.replace(MINOR, '')
    : text
        .replace(/\s*(\/\s*kwh|per\s+kwh)\s*$/i, '')
        .replace(MAJOR, '')
        .trim();
  const amount = parseNumber(bare, { min: -1e6, max: 1e7 });
  if (!amount.ok) {
    const both = readings(bare.trim());
    // A price with a comma before three digits is a decimal comma: nobody pays a thousand for a kilowatt-hour.
    const small = both.filter((value) => Math.abs(value) < (minor ? 1000 : 100));
    if (both.length > 1 && small.length === 1) return price(small[0], minor);
    return fail(`“${text.trim()}” is not a price: write for example 0.245, or 24.5p.`);
  }
  return price(amount.value, minor);
}

function price(amount: number, minor: boolean): Parsed<number> {
  const value = minor ? Number((amount / 100).toPrecision(12)) : amount;
  if (value < -100 || value > 100000) return fail('That price is out of range: from −100 to 100000 per kWh.');
  return { ok: true, value };
}

/**
 * A time of day: `17:30`, `17.30`, `1730`, `17h30`, `5:30pm`, `5 p.m.`, `noon`, `midnight`.
 * @param text as typed
 * @param end true where the time ends a span: midnight and 24:00 are then the day's end
 * @returns `HH:MM`
 */
export function parseClock(text: string, end = false): Parsed<string> {
  const bare = text
    .trim()
    .toLowerCase()
    .replace(BLANKS, '')
    .replace(/a\.?m\.?$/, 'am')
    .replace(/p\.?m\.?$/, 'pm');
  const wrong = fail(`“${text.trim()}” is not a time of day: write for example 17:30 or 5.30 pm.`);
  if (bare === 'noon' || bare === 'midday') return { ok: true, value: '12:00' };
  if (bare === 'midnight') return { ok: true, value: end ? '24:00' : '00:00' };
  const match =
    /^(\d{1,2})[:.h,](\d{2})(?:[:.]\d{2})?h?(am|pm)?$/.exec(bare) ??
    /^(\d{1,2})(\d{2})(am|pm)?$/.exec(bare) ??
    /^(\d{1,2})()h?(am|pm)?$/.exec(bare);
  if (!match) return wrong;
  const [, hourText, minuteText, half] = match;
  let hour = Number(hourText);
  const minute = Number(minuteText);
  if (minute > 59) return wrong;
  if (half) {
    if (hour < 1 || hour > 12) return wrong;
    hour = (hour % 12) + (half === 'pm' ? 12 : 0);
  } else if (!minuteText && !bare.includes('h') && hour >= 1 && hour <= 12) {
    return fail(`“${text.trim()}” can be morning or evening: write ${hour}:00 or ${hour} pm.`);
  }
  if (hour === 24 && minute === 0) return end ? { ok: true, value: '24:00' } : { ok: true, value: '00:00' };
  if (hour > 23) return wrong;
  return { ok: true, value: `${String(hour).padStart(2, '0')}:${String(minute).padStart(2, '0')}` };
}

/**
 * A civil date: `2026-03-01`, `1.3.2026`, `01/03/2026` (day first, as this country writes it).
 * @returns `YYYY-MM-DD`
 */
export function parseDate(text: string): Parsed<string> {
  const bare = text.trim();
  const iso = /^(\d{4})[-/.](\d{1,2})[-/.](\d{1,2})$/.exec(bare);
  const dayFirst = /^(\d{1,2})[-/. ](\d{1,2})[-/. ](\d{4})$/.exec(bare);
  const parts = iso ? [iso[1], iso[2], iso[3]] : dayFirst ? [dayFirst[3], dayFirst[2], dayFirst[1]] : null;
  const wrong = fail(`“${bare}” is not a date: write for example 2026-03-01.`);
  if (!parts) return wrong;
  const [year, month, day] = parts.map(Number);
  const date = new Date(Date.UTC(year, month - 1, day));
  if (year < 1970 || year > 2199 || date.getUTCMonth() !== month - 1 || date.getUTCDate() !== day) return wrong;
  return { ok: true, value: date.toISOString().slice(0, 10) };
}

/**
 * A number as a field shows it: point as decimal mark, no grouping, no trailing noise of binary fractions.
 * @param value `undefined` and `null` show as an empty field, never as 0
 */
export function toText(value: number | null | undefined): string {
  return value === null || value === undefined ? '' : shown(value);
}
