import { DAY_MS, dayNumber, daysInMonth } from '../time/civil.ts';
import { monthOf } from './months.ts';
import { LogRefused } from './refusal.ts';

/** Reads the time of a row. One reader serves a whole file; the last time read stands in its fields. */
export interface StampReader {
  /** Milliseconds since 1970-01-01T00:00, in UTC if `zoned`, else on the clock that wrote the file. */
  ms: number;
  /** Whether the text itself fixed the instant, by an offset or as an epoch. */
  zoned: boolean;
  /** False if the text is no such time; the fields then mean nothing. */
  read(text: string): boolean;
}

const NO_DIGIT = -1;

function digit(text: string, at: number): number {
  const value = text.charCodeAt(at) - 48;
  return value >= 0 && value <= 9 ? value : NO_DIGIT;
}

/** Two digits at a place, or a negative number. */
function two(text: string, at: number): number {
  const tens = digit(text, at);
  const ones = digit(text, at + 1);
  return tens < 0 || ones < 0 ? NO_DIGIT : tens * 10 + ones;
}

/** Milliseconds of a civil time, NaN if the calendar or the clock has none such. 24:00 is the day's end. */
function civilMs(year: number, month: number, day: number, hour: number, minute: number, ms: number): number {
  if (month < 1 || month > 12 || day < 1 || day > daysInMonth(year, month)) return NaN;
  if (minute < 0 || minute > 59 || ms < 0 || ms >= 60_000) return NaN;
  if (hour < 0 || hour > 24 || (hour === 24 && (minute > 0 || ms > 0))) return NaN;
  return dayNumber(year, month, day) * DAY_MS + (hour * 60 + minute) * 60_000 + ms;
}

/** ISO 8601 and RFC 3339, with T or blanks between date and time, with or without offset. */
class IsoReader implements StampReader {
  ms = NaN;
  zoned = false;

  read(text: string): boolean {
    this.zoned = false;
    let at = 0;
    let end = text.length;
    while (at < end && text.charCodeAt(at) === 32) at++;
    while (end > at && text.charCodeAt(end - 1) === 32) end--;
    const start = at;
    const century = two(text, at);
    const years = two(text, at + 2);
    if (century < 0 || years < 0) return false;
    const extended = text.charCodeAt(at + 4) === 45;
    at += extended ? 5 : 4;
    const month = two(text, at);
    if (month < 0 || (extended && text.charCodeAt(at + 2) !== 45)) return false;
    at += extended ? 3 : 2;
    const day = two(text, at);
    if (day < 0) return false;
    at += 2;
    if (at - start !== (extended ? 10 : 8)) return false;
    let hour = 0;
    let minute = 0;
    let ms = 0;
    if (at < end) {
      const separator = text.charCodeAt(at);
      if (separator === 84 || separator === 116) at++;
      else if (separator === 32) while (text.charCodeAt(at) === 32) at++;
      else return false;
      hour = two(text, at);
      if (hour < 0) {
        hour = digit(text, at);
        if (hour < 0 || text.charCodeAt(at + 1) !== 58) return false;
        at += 1;
      } else at += 2;
      const colon = text.charCodeAt(at) === 58;
      if (colon) at++;
      minute = two(text, at);
      if (minute < 0) return false;
      at += 2;
      if (at < end && (colon ? text.charCodeAt(at) === 58 : digit(text, at) >= 0)) {
        if (colon) at++;
        const seconds = two(text, at);
        if (seconds < 0) return false;
        ms = seconds * 1000;
        at += 2;
        const mark = text.charCodeAt(at);
        if (at < end && (mark === 46 || mark === 44)) {
          at++;
          let weight = 100;
          const from = at;
          for (let d = digit(text, at); at < end && d >= 0; d = digit(text, at)) {
            ms += d * weight;
            weight = weight > 1 ? weight / 10 : 0;
            at++;
          }
          if (at === from) return false;
        }
      }
    }
    const local = civilMs(century * 100 + years, month, day, hour, minute, ms);
    if (local !== local) return false;
    if (at === end) {
      this.ms = local;
      return true;
    }
    if (at === end - 1 && text.charCodeAt(at) === 90) {
      this.ms = local;
      this.zoned = true;
      return true;
    }
    const offset = offsetOf(text.slice(at, end).trim());
    if (offset === null) return false;
    this.ms = local - offset;
    this.zoned = true;
    return true;
  }
}

/** Milliseconds east of UTC of `Z`, `UTC`, `GMT`, `±hh`, `±hhmm` or `±hh:mm`; null if it is none of them. */
function offsetOf(text: string): number | null {
  if (/^(?:z|utc|gmt)$/i.test(text)) return 0;
  const match = /^(?:utc|gmt)?([+−-])(\d{2})(?::?(\d{2}))?$/i.exec(text);
  if (!match) return null;
  const minutes = Number(match[2]) * 60 + Number(match[3] ?? 0);
  if (minutes > 15 * 60 || Number(match[3] ?? 0) > 59) return null;
  return (match[1] === '+' ? minutes : -minutes) * 60_000;
}

/** Seconds or milliseconds since 1970-01-01T00:00Z. */
class EpochReader implements StampReader {
  ms = NaN;
  readonly zoned = true;
  constructor(
    private readonly unitMs: number,
    private readonly decimal: string,
  ) {}

  read(text: string): boolean {
    const trimmed = text.trim();
    if (!/^\d{1,16}(?:[.,]\d*)?$/.test(trimmed)) return false;
    if (/[.,]/.test(trimmed) && !trimmed.includes(this.decimal)) return false;
    this.ms = Math.round(Number(trimmed.replace(',', '.')) * this.unitMs);
    return true;
  }
}

/** Days since 1899-12-30 on the clock that wrote the file, as spreadsheets count; to the nearest second. */
class SerialReader implements StampReader {
  ms = NaN;
  readonly zoned = false;
  constructor(private readonly decimal: string) {}

  read(text: string): boolean {
    const trimmed = text.trim();
    if (!/^\d{5}(?:[.,]\d*)?$/.test(trimmed)) return false;
    if (/[.,]/.test(trimmed) && !trimmed.includes(this.decimal)) return false;
    const days = Number(trimmed.replace(',', '.'));
    this.ms = Math.round((days - 25_569) * 86_400) * 1000;
    return true;
  }
}

type Token =
  | { is: 'text'; text: string }
  | { is: 'blank' }
  | { is: 'year'; digits: number }
  | { is: 'month' | 'day' | 'hour' | 'hour12' | 'hour11' | 'minute' | 'second'; exact: boolean }
  | { is: 'monthName' | 'weekday' | 'half' | 'fraction' | 'offset' | 'ordinal' };

const NUMERIC: Record<string, 'month' | 'day' | 'hour' | 'hour12' | 'hour11' | 'minute' | 'second'> = {
  M: 'month',
  L: 'month',
  d: 'day',
  H: 'hour',
  k: 'hour',
  h: 'hour12',
  K: 'hour11',
  m: 'minute',
  s: 'second',
};

/** Takes a date-fns pattern apart. */
function tokensOf(format: string): Token[] {
  const tokens: Token[] = [];
  const unknown = (part: string): never => {
    throw new LogRefused(`The time format "${format}" has the part "${part}", which is not known.`);
  };
  for (const [part] of format.matchAll(/''|'(?:''|[^'])+'|do|([A-Za-z])\1*|[^]/g)) {
    const letter = part[0];
    if (part === "''") tokens.push({ is: 'text', text: "'" });
    else if (part.length > 1 && letter === "'")
      for (const char of part.slice(1, -1).replaceAll("''", "'"))
        tokens.push(char === ' ' ? { is: 'blank' } : { is: 'text', text: char });
    else if (letter === ' ') {
      if (tokens[tokens.length - 1]?.is !== 'blank') tokens.push({ is: 'blank' });
    } else if (!/[A-Za-z]/.test(letter)) tokens.push({ is: 'text', text: part });
    else if (part === 'do') tokens.push({ is: 'ordinal' });
    else if (letter === 'y' || letter === 'u') {
      if (part.length > 4 || part.length === 3) unknown(part);
      tokens.push({ is: 'year', digits: part.length === 2 ? 2 : 4 });
    } else if ((letter === 'M' || letter === 'L') && part.length > 2) tokens.push({ is: 'monthName' });
    else if (NUMERIC[letter] && part.length <= 2) tokens.push({ is: NUMERIC[letter], exact: false });
    else if (letter === 'E' || letter === 'i' || letter === 'e' || letter === 'c') tokens.push({ is: 'weekday' });
    else if (letter === 'a' || letter === 'b' || letter === 'B') tokens.push({ is: 'half' });
    else if (letter === 'S') tokens.push({ is: 'fraction' });
    else if (letter === 'X' || letter === 'x' || letter === 'O') tokens.push({ is: 'offset' });
    else unknown(part);
  }
  tokens.forEach((token, i) => {
    // Digits that run into digits have their full width.
    const next = tokens[i + 1];
    if ('exact' in token && next && ('exact' in next || next.is === 'year' || next.is === 'fraction'))
      token.exact = true;
    const last = tokens[i - 1];
    if ('exact' in token && last && (('exact' in last && last.exact) || last.is === 'year')) token.exact = true;
  });
  return tokens;
}

const HALF = /^([ap])\.?\s?m\.?/i;
const WORD = /^\p{L}+\.?/u;
const OFFSET = /^(?:Z|UTC|GMT)?(?:[+−-]\d{2}(?::?\d{2})?)?/i;

/** A date-fns pattern. */
class PatternReader implements StampReader {
  ms = NaN;
  zoned = false;
  private readonly tokens: Token[];

  constructor(format: string) {
    this.tokens = tokensOf(format);
    const has = (is: Token['is']): boolean => this.tokens.some((token) => token.is === is);
    if (!has('year') || !(has('month') || has('monthName')) || !(has('day') || has('ordinal')))
      throw new LogRefused(`The time format "${format}" does not say where year, month and day stand.`);
  }

  read(text: string): boolean {
    const end = text.length;
    let at = 0;
    let year = 0;
    let month = 0;
    let day = 0;
    let hour = 0;
    let minute = 0;
    let ms = 0;
    let half = -1;
    let twelve = false;
    let offset: number | null = null;
    while (at < end && text.charCodeAt(at) === 32) at++;
    for (const token of this.tokens) {
      switch (token.is) {
        case 'blank':
          if (text.charCodeAt(at) !== 32) return false;
          while (text.charCodeAt(at) === 32) at++;
          break;
        case 'text':
          if (text[at] !== token.text) return false;
          at++;
          break;
        case 'year': {
          const first = two(text, at);
          if (first < 0) return false;
          at += 2;
          if (token.digits === 2) {
            // Two digits mean 1970 to 2069.
            year = first < 70 ? 2000 + first : 1900 + first;
          } else {
            const second = two(text, at);
            if (second < 0) return false;
            at += 2;
            year = first * 100 + second;
          }
          break;
        }
        case 'monthName':
        case 'weekday':
        case 'half':
        case 'offset':
        case 'ordinal': {
          const rest = text.slice(at);
          if (token.is === 'monthName') {
            const word = WORD.exec(rest)?.[0];
            const found = word ? monthOf(word) : null;
            if (!word || found === null) return false;
            month = found;
            at += word.length;
          } else if (token.is === 'weekday') {
            const word = WORD.exec(rest)?.[0];
            if (!word) return false;
            at += word.length;
          } else if (token.is === 'half') {
            const word = HALF.exec(rest);
            if (!word) return false;
            half = /a/i.test(word[1]) ? 0 : 1;
            at += word[0].length;
          } else if (token.is === 'offset') {
            const word = OFFSET.exec(rest)?.[0] ?? '';
            offset = offsetOf(word);
            if (offset === null) return false;
            at += word.length;
          } else {
            const word = /^(\d{1,2})(?:st|nd|rd|th|\.|º|er)?/i.exec(rest);
            if (!word) return false;
            day = Number(word[1]);
            at += word[0].length;
          }
          break;
        }
        case 'fraction': {
          let weight = 100;
          const from = at;
          for (let d = digit(text, at); d >= 0; d = digit(text, at)) {
            ms += d * weight;
            weight = weight > 1 ? weight / 10 : 0;
            at++;
          }
          if (at === from) return false;
          break;
        }
        default: {
          let value = two(text, at);
          if (value >= 0) at += 2;
          else {
            value = digit(text, at);
            if (value < 0 || token.exact) return false;
            at += 1;
          }
          if (token.is === 'month') month = value;
          else if (token.is === 'day') day = value;
          else if (token.is === 'minute') minute = value;
          else if (token.is === 'second') {
            if (value > 59) return false;
            ms += value * 1000;
          } else {
            hour = value;
            if (token.is === 'hour12' && (value < 1 || value > 12)) return false;
            if (token.is === 'hour11' && value > 11) return false;
            twelve = token.is !== 'hour';
          }
        }
      }
    }
    while (at < end && text.charCodeAt(at) === 32) at++;
    if (at !== end) return false;
    if (half >= 0) {
      if (twelve) hour = (hour % 12) + half * 12;
    }
    const local = civilMs(year, month, day, hour, minute, ms);
    if (local !== local) return false;
    this.ms = offset === null ? local : local - offset;
    this.zoned = offset !== null;
    return true;
  }
}

/**
 * A reader for the time format of a column plan.
 * @param format `iso`, `epochSeconds`, `epochMilliseconds`, `excelSerial` or a date-fns pattern
 * @param decimal the decimal mark of the file's numbers
 * @throws LogRefused if the format means nothing
 */
export function stampReader(format: string, decimal: string = '.'): StampReader {
  switch (format) {
    case 'iso':
      return new IsoReader();
    case 'epochSeconds':
    case 't':
      return new EpochReader(1000, decimal);
    case 'epochMilliseconds':
    case 'T':
      return new EpochReader(1, decimal);
    case 'excelSerial':
      return new SerialReader(decimal);
    default:
      return new PatternReader(format);
  }
}
