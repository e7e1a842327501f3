import type { TextDecoder } from 'node:util';
import type { ColumnPlan } from '../../shared/api/plan.ts';
import type { Feed } from '../../shared/columns/feed.ts';
import type { Interpreter } from '../../shared/columns/interpret.ts';
import { Lines, MAX_LINE, tooLong } from '../../shared/columns/lines.ts';
import { DAY_MS, dayNumber, daysInMonth } from '../../shared/time/civil.ts';
import type { ByteReader } from './general.ts';

const LF = 10;
const CR = 13;
const QUOTE = 34;
const MINUS = 45;
const PLUS = 43;
const ZERO = 48;
const COLON = 58;
const LETTER_Z = 90;

/** What a cell is for; values are 0 and more, the column's slot. */
const IGNORED = -1;
const DATE_TIME = -2;
const DATE = -3;
const TIME = -4;
const EPOCH = -5;

/** Where the parts of a date of ten bytes stand. */
interface DateForm {
  year: number;
  month: number;
  day: number;
  /** The two separators. */
  first: number;
  second: number;
  separator: number;
}

/** How the times of a file are written, if plainly enough for the scanner. */
interface TimeForm {
  date: DateForm | null;
  /** Between date and time: byte, or 0 for the T or blank of ISO. */
  between: number;
  seconds: 'never' | 'always' | 'maybe';
  /** An offset may follow. */
  offset: boolean;
  /** Milliseconds of an epoch's unit, 0 for dates. */
  epochUnit: number;
}

const DATE_PARTS = /^(?:(yyyy)([-./])MM\2dd|dd([-./])MM\3(yyyy)|MM([-./])dd\5(yyyy))$/;

function dateForm(pattern: string): DateForm | null {
  const match = DATE_PARTS.exec(pattern);
  if (!match) return null;
  const separator = (match[2] ?? match[3] ?? match[5]).charCodeAt(0);
  const year = pattern.indexOf('yyyy');
  return {
    year,
    month: pattern.indexOf('MM'),
    day: pattern.indexOf('dd'),
    first: year === 0 ? 4 : 2,
    second: year === 0 ? 7 : 5,
    separator,
  };
}

/** The time form of a plan, null if the scanner does not know it. */
function timeForm(format: string): TimeForm | null {
  const plain = { between: 0, seconds: 'maybe' as const, offset: false };
  if (format === 'epochSeconds') return { ...plain, date: null, epochUnit: 1000 };
  if (format === 'epochMilliseconds') return { ...plain, date: null, epochUnit: 1 };
  if (format === 'iso') return { ...plain, date: dateForm('yyyy-MM-dd'), offset: true, epochUnit: 0 };
  const match = /^(\S{10})( |'T')HH:mm(:ss)?$/.exec(format);
  const date = match ? dateForm(match[1]) : null;
  if (!match || !date) return null;
  return {
    date,
    between: match[2] === ' ' ? 32 : 84,
    seconds: match[3] ? 'always' : 'never',
    offset: false,
    epochUnit: 0,
  };
}

const PLAIN_ENCODINGS = /^(?:utf-?8|us-ascii|ascii|latin1|iso-?8859-1|windows-1252|cp1252)$/i;

/** Whether a plan is of a plain numeric table that the byte scanner can read. */
export function isPlain(plan: ColumnPlan): boolean {
  const form = timeForm(plan.time.format);
  return (
    form !== null &&
    (plan.shape === undefined || plan.shape.kind === 'wide') &&
    PLAIN_ENCODINGS.test(plan.encoding) &&
    [',', ';', '\t', '|'].includes(plan.delimiter) &&
    plan.delimiter !== plan.decimal &&
    plan.columns.every((column) => column.kind !== 'state') &&
    !(plan.missing ?? []).some((word) => /\d/.test(word)) &&
    (plan.time.columns.length === 1 || (plan.time.columns.length === 2 && form.date !== null && form.between !== 84))
  );
}

/**
 * The fast path: reads plain numeric tables from their bytes, without a string per cell or an object per row. A line
 * that it has any doubt about goes to the feed, where the general reader's lines go.
 */
export class FastReader implements ByteReader {
  private readonly form: TimeForm;
  private readonly delimiter: number;
  private readonly decimal: number;
  private rest: Uint8Array = new Uint8Array(0);
  private line = 1;
  private roles: Int16Array | null = null;
  private width = 0;
  private mantissas = new Float64Array(0);
  private decimals = new Int8Array(0);
  // The last date, so that a day's offset is found once.
  private dateKey = -1;
  private dateMs = NaN;
  private offset = NaN;

  /** @param decoder of the plan's encoding, for single lines */
  constructor(
    plan: ColumnPlan,
    private readonly feed: Feed,
    private readonly decoder: TextDecoder,
  ) {
    this.form = timeForm(plan.time.format) as TimeForm;
    this.delimiter = plan.delimiter.charCodeAt(0);
    this.decimal = plan.decimal.charCodeAt(0);
  }

  push(bytes: Uint8Array): void {
    let buffer = new Uint8Array(bytes.buffer, bytes.byteOffset, bytes.length);
    if (this.rest.length > 0) {
      const joined = new Uint8Array(this.rest.length + buffer.length);
      joined.set(this.rest);
      joined.set(buffer, this.rest.length);
      buffer = joined;
    }
    let end = buffer.lastIndexOf(LF) + 1;
    if (end === 0) {
      // Old line ends: a CR at the very end may be the first half of a CR LF.
      end = buffer.lastIndexOf(CR, buffer.length - 2) + 1;
      if (buffer.length < 2) end = 0;
    }
    if (end > 0) this.scan(buffer, end);
    this.rest = buffer.slice(end);
    if (this.rest.length > MAX_LINE) throw tooLong(this.line);
  }

  end(): void {
    const { rest } = this;
    if (rest.length === 0) return;
    if (rest[rest.length - 1] === CR) this.scan(rest, rest.length);
    else {
      const lines = new Lines((text, _, torn) => this.feed.line(text, this.line++, torn));
      lines.push(this.decoder.decode(rest));
      lines.end();
    }
  }

  /** Finds out what each cell is for, once the heading is known; no roles if the scanner cannot serve this file. */
  private prepare(interpreter: Interpreter): void {
    const { time, places } = interpreter.layout;
    this.mantissas = new Float64Array(places.length);
    this.decimals = new Int8Array(places.length);
    const used = [...time, ...places];
    // A cell with two uses, or the time before its date: every line goes the general way.
    if (new Set(used).size !== used.length || time[1] < time[0]) {
      this.roles = new Int16Array(0);
      return;
    }
    this.width = interpreter.width;
    this.roles = new Int16Array(Math.max(...used) + 1).fill(IGNORED);
    if (this.form.epochUnit > 0) this.roles[time[0]] = EPOCH;
    else if (time.length === 1) this.roles[time[0]] = DATE_TIME;
    else {
      this.roles[time[0]] = DATE;
      this.roles[time[1]] = TIME;
    }
    places.forEach((place, slot) => ((this.roles as Int16Array)[place] = slot));
  }

  /** Hands a line to the feed. @returns where the next line begins */
  private slow(buffer: Uint8Array, start: number): number {
    let at = start;
    while (buffer[at] !== LF && buffer[at] !== CR) at++;
    if (at - start > MAX_LINE) throw tooLong(this.line);
    this.feed.line(this.decoder.decode(buffer.subarray(start, at)), this.line++, false);
    return buffer[at] === CR && buffer[at + 1] === LF ? at + 2 : at + 1;
  }

  /** Reads the lines of `buffer` up to `end`, which is behind a line end. */
  private scan(buffer: Uint8Array, end: number): void {
    let at = 0;
    while (at < end && (this.feed.interpreter === null || this.feed.open)) at = this.slow(buffer, at);
    const { interpreter } = this.feed;
    if (at >= end || interpreter === null) return;
    if (this.roles === null) this.prepare(interpreter);
    const roles = this.roles as Int16Array;
    if (roles.length === 0) {
      while (at < end) at = this.slow(buffer, at);
      return;
    }
    this.rows(buffer, at, end, interpreter, roles);
  }

  private rows(buffer: Uint8Array, from: number, end: number, interpreter: Interpreter, roles: Int16Array): void {
    const { delimiter, decimal, mantissas, decimals, width, form, feed } = this;
    const { clock, collector, counts } = interpreter;
    const needed = roles.length;
    const { epochUnit, between, seconds, offset: mayHaveOffset } = form;
    const date = form.date ?? { year: 0, month: 0, day: 0, first: 0, second: 0, separator: 0 };
    const yearAt = date.year;
    const monthAt = date.month;
    const dayAt = date.day;
    const firstAt = date.first;
    const secondAt = date.second;
    const { separator } = date;
    let taken = 0;
    let lastLocal = NaN;
    let at = from;
    let slow = feed.open || clock.holding;
    while (at < end) {
      const start = at;
      if (!slow) {
        let cell = 0;
        let usable = 0;
        let local = NaN;
        let zone = NaN;
        let byte = 0;
        let ok = true;
        for (;;) {
          const role = cell < needed ? roles[cell] : IGNORED;
          if (role >= 0) {
            // A number: sign, digits, mark, digits.
            byte = buffer[at];
            const negative = byte === MINUS;
            if (negative) byte = buffer[++at];
            const first = at;
            let mantissa = 0;
            let digit = byte - ZERO;
            while (digit >= 0 && digit <= 9) {
              mantissa = mantissa * 10 + digit;
              byte = buffer[++at];
              digit = byte - ZERO;
            }
            let digits = at - first;
            let fraction = 0;
            if (byte === decimal) {
              byte = buffer[++at];
              const mark = at;
              digit = byte - ZERO;
              while (digit >= 0 && digit <= 9) {
                mantissa = mantissa * 10 + digit;
                byte = buffer[++at];
                digit = byte - ZERO;
              }
              fraction = at - mark;
              digits += fraction;
              if (digits === 0) ok = false;
            }
            if (digits === 0) {
              if (negative) ok = false;
              mantissas[role] = NaN;
            } else {
              if (digits > 15) ok = false;
              mantissas[role] = negative && mantissa !== 0 ? -mantissa : mantissa;
              decimals[role] = fraction;
              usable++;
            }
          } else if (role === IGNORED) {
            byte = buffer[at];
            if (cell >= width && byte !== delimiter && byte !== LF && byte !== CR) ok = false;
            while (byte !== delimiter && byte !== LF && byte !== CR) {
              if (byte === QUOTE) ok = false;
              byte = buffer[++at];
            }
          } else if (role === EPOCH) {
            let whole = 0;
            const first = at;
            byte = buffer[at];
            let digit = byte - ZERO;
            while (digit >= 0 && digit <= 9) {
              whole = whole * 10 + digit;
              byte = buffer[++at];
              digit = byte - ZERO;
            }
            if (at - first > 15 || at === first) ok = false;
            local = whole * epochUnit;
            zone = 0;
          } else {
            if (role !== TIME) {
              // The date, ten bytes. Digits outside 0..9 turn the sum of checks negative or too large.
              const y0 = buffer[at + yearAt] - ZERO;
              const y1 = buffer[at + yearAt + 1] - ZERO;
              const y2 = buffer[at + yearAt + 2] - ZERO;
              const y3 = buffer[at + yearAt + 3] - ZERO;
              const m0 = buffer[at + monthAt] - ZERO;
              const m1 = buffer[at + monthAt + 1] - ZERO;
              const d0 = buffer[at + dayAt] - ZERO;
              const d1 = buffer[at + dayAt + 1] - ZERO;
              const bad =
                y0 >>> 0 > 9 ||
                y1 >>> 0 > 9 ||
                y2 >>> 0 > 9 ||
                y3 >>> 0 > 9 ||
                m0 >>> 0 > 9 ||
                m1 >>> 0 > 9 ||
                d0 >>> 0 > 9 ||
                d1 >>> 0 > 9;
              if (bad || buffer[at + firstAt] !== separator || buffer[at + secondAt] !== separator) {
                ok = false;
                break;
              }
              const key = (((y0 * 10 + y1) * 10 + y2) * 10 + y3) * 10_000 + (m0 * 10 + m1) * 100 + d0 * 10 + d1;
              if (key !== this.dateKey && !this.turnTo(key, interpreter)) {
                ok = false;
                break;
              }
              local = this.dateMs;
              at += 10;
              byte = buffer[at];
            }
            if (role === DATE_TIME) {
              if (between === 0 ? byte !== 84 && byte !== 32 : byte !== between) {
                ok = false;
                break;
              }
              at++;
            }
            if (role !== DATE) {
              const h0 = buffer[at] - ZERO;
              const h1 = buffer[at + 1] - ZERO;
              const i0 = buffer[at + 3] - ZERO;
              const i1 = buffer[at + 4] - ZERO;
              const hour = h0 * 10 + h1;
              if (
                h0 >>> 0 > 2 ||
                h1 >>> 0 > 9 ||
                i0 >>> 0 > 5 ||
                i1 >>> 0 > 9 ||
                hour > 23 ||
                buffer[at + 2] !== COLON
              ) {
                ok = false;
                break;
              }
              // With the date in an earlier cell `local` is its midnight; in a later one the line is in doubt below.
              local += (hour * 60 + i0 * 10 + i1) * 60_000;
              at += 5;
              byte = buffer[at];
              if (byte === COLON && seconds !== 'never') {
                const s0 = buffer[at + 1] - ZERO;
                const s1 = buffer[at + 2] - ZERO;
                if (s0 >>> 0 > 5 || s1 >>> 0 > 9) {
                  ok = false;
                  break;
                }
                local += (s0 * 10 + s1) * 1000;
                at += 3;
                byte = buffer[at];
              } else if (seconds === 'always') {
                ok = false;
                break;
              }
              if (mayHaveOffset) {
                if (byte === LETTER_Z) {
                  zone = 0;
                  byte = buffer[++at];
                } else if (byte === PLUS || byte === MINUS) {
                  const o0 = buffer[at + 1] - ZERO;
                  const o1 = buffer[at + 2] - ZERO;
                  const p0 = buffer[at + 4] - ZERO;
                  const p1 = buffer[at + 5] - ZERO;
                  if (
                    o0 >>> 0 > 1 ||
                    o1 >>> 0 > 9 ||
                    o0 * 10 + o1 > 14 ||
                    p0 >>> 0 > 5 ||
                    p1 >>> 0 > 9 ||
                    buffer[at + 3] !== COLON
                  ) {
                    ok = false;
                    break;
                  }
                  zone = ((o0 * 10 + o1) * 60 + p0 * 10 + p1) * 60_000;
                  if (byte === MINUS) zone = -zone;
                  at += 6;
                  byte = buffer[at];
                }
              }
            }
          }
          if (!ok) break;
          cell++;
          if (byte === delimiter) {
            at++;
            continue;
          }
          if (byte !== LF && byte !== CR) ok = false;
          break;
        }
        if (ok && cell >= needed && usable > 0 && at - start <= MAX_LINE) {
          const utc = local - (zone === zone ? zone : this.offset);
          if (utc === utc && (epochUnit === 0 || (utc > 662_688_000_000 && utc < 4_070_908_800_000))) {
            collector.add(utc, mantissas, decimals);
            if (zone !== zone) lastLocal = local;
            taken++;
            this.line++;
            at += byte === CR && buffer[at + 1] === LF ? 2 : 1;
            continue;
          }
        }
      }
      if (lastLocal === lastLocal) clock.lastLocal = lastLocal;
      at = this.slow(buffer, start);
      slow = feed.open || clock.holding;
    }
    if (lastLocal === lastLocal) clock.lastLocal = lastLocal;
    counts.read += taken;
    counts.accepted += taken;
    interpreter.fastRows += taken;
  }

  /** Makes a date the current one; false if the calendar has it not, or it is too far away. */
  private turnTo(key: number, interpreter: Interpreter): boolean {
    const year = Math.floor(key / 10_000);
    const month = Math.floor(key / 100) % 100;
    const day = key % 100;
    if (year < 1991 || year > 2098 || month < 1 || month > 12 || day < 1 || day > daysInMonth(year, month))
      return false;
    this.dateKey = key;
    this.dateMs = dayNumber(year, month, day) * DAY_MS;
    // NaN on days near a change, whose rows go the general way, where their order is looked at.
    this.offset = interpreter.clock.dayOffset(this.dateMs);
    return true;
  }
}
