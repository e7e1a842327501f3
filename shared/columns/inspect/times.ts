import { DAY_MS } from '../../time/civil.ts';
import { monthOf } from '../months.ts';
import { type StampReader, stampReader } from '../stamp.ts';

/** A way to read a column's cells as times, tried on them. */
export interface TimeReading {
  format: string;
  /** Milliseconds per cell, in the order of the rows; NaN where the cell is no such time. */
  times: Float64Array;
  /** The share of non-empty cells that could be read. */
  share: number;
  zoned: boolean;
  /** A date without time, or a time of day without date (then `times` are of the day 0). */
  part: 'dateTime' | 'date' | 'time';
  /** Whether numbers other than times are written like this too. */
  likeNumbers: boolean;
}

const SEPARATED =
  /^(?:(\p{L}{2,}\.?,?)\s+)?(\d{1,4}|\p{L}{3,}\.?)([-./ ])\s?(\d{1,2}|\p{L}{3,}\.?)(?:\3\s?|,? )(\d{2,4})(?:(,? +|T|t| - )(\d{1,2})([:.h])(\d{2})(?:([:.])(\d{2})(?:[.,](\d{1,9}))?)?(\s?[ap]\.?\s?m\.?)?)?\s*(Z|UTC|GMT|[+−-]\d{2}:?\d{0,2})?$/iu;
const TIME_OF_DAY = /^(\d{1,2})([:.h])(\d{2})(?:([:.])(\d{2}))?(\s?[ap]\.?\s?m\.?)?$/i;

const quote = (text: string): string => (/^[A-Za-z]+$/.test(text) ? `'${text}'` : text);

function timeTokens(
  hour: string,
  mark: string,
  second: string | undefined,
  secondMark: string | undefined,
  half: string | undefined,
): string {
  const h = half ? (hour.length === 2 ? 'hh' : 'h') : 'HH';
  const blank = half && /^\s/.test(half) ? ' ' : '';
  return `${h}${quote(mark)}mm${second ? `${secondMark}ss` : ''}${half ? `${blank}a` : ''}`;
}

/** The formats that one cell may be written in. */
export function formatsOf(cell: string): { format: string; part: TimeReading['part']; likeNumbers: boolean }[] {
  const text = cell.trim();
  if (/^\d{4}-\d{2}-\d{2}$/.test(text)) return [{ format: 'iso', part: 'date', likeNumbers: false }];
  if (
    /^\d{4}-\d{2}-\d{2}(?:T| +)\d{1,2}:\d{2}(?::\d{2}(?:[.,]\d+)?)?\s*(?:Z|UTC|GMT|[+−-]\d{2}(?::?\d{2})?)?$/i.test(
      text,
    )
  )
    return [{ format: 'iso', part: 'dateTime', likeNumbers: false }];
  if (/^\d{8}T?\s?\d{4,6}(?:Z|[+-]\d{2}:?\d{2})?$/i.test(text) && /[T\sZ+-]/i.test(text))
    return [{ format: 'iso', part: 'dateTime', likeNumbers: false }];
  if (/^(?:19|20)\d{6}$/.test(text)) return [{ format: 'yyyyMMdd', part: 'date', likeNumbers: true }];
  if (/^(?:19|20)\d{10}$/.test(text)) return [{ format: 'yyyyMMddHHmm', part: 'dateTime', likeNumbers: true }];
  if (/^(?:19|20)\d{12}$/.test(text)) return [{ format: 'yyyyMMddHHmmss', part: 'dateTime', likeNumbers: true }];
  if (/^\d{9,10}(?:[.,]\d+)?$/.test(text)) return [{ format: 'epochSeconds', part: 'dateTime', likeNumbers: true }];
  if (/^\d{12,13}$/.test(text)) return [{ format: 'epochMilliseconds', part: 'dateTime', likeNumbers: true }];
  if (/^[3-6]\d{4}(?:[.,]\d+)?$/.test(text)) return [{ format: 'excelSerial', part: 'dateTime', likeNumbers: true }];
  const clock = TIME_OF_DAY.exec(text);
  if (clock && Number(clock[1]) <= 24 && Number(clock[3]) < 60) {
    // A point between two numbers is a decimal mark before it is a clock's.
    if (clock[2] === '.' && !clock[6] && !clock[5]) return [];
    return [{ format: timeTokens(clock[1], clock[2], clock[5], clock[4], clock[6]), part: 'time', likeNumbers: false }];
  }
  const match = SEPARATED.exec(text);
  if (!match) return [];
  const [, weekday, a, separator, b, c, between, hour, mark, , secondMark, second, fraction, half, offset] = match;
  const tail =
    (between !== undefined
      ? `${/t/i.test(between) && between.trim().length === 1 ? `'${between}'` : between.replace(/ +/g, ' ')}${timeTokens(hour, mark, second, secondMark, half)}${fraction ? '.SSS' : ''}`
      : '') + (offset ? `${/\s/.test(text[text.length - offset.length - 1] ?? '') ? ' ' : ''}XXX` : '');
  const head = weekday ? `EEE${weekday.endsWith(',') ? ',' : ''} ` : '';
  const gap = /[-./]/.test(separator) ? separator : ' ';
  const second2 = text.includes(`${b}, ${c}`) ? ', ' : gap;
  const join = (x: string, y: string, z: string): string => `${head}${x}${gap}${y}${second2}${z}${tail}`;
  const part = between !== undefined ? ('dateTime' as const) : ('date' as const);
  const year = (digits: string): string => (digits.length === 4 ? 'yyyy' : 'yy');
  const ways: string[] = [];
  const named = (word: string): boolean => /^\p{L}/u.test(word) && monthOf(word) !== null;
  if (named(a)) ways.push(join('MMM', 'd', year(c)));
  else if (named(b)) ways.push(a.length === 4 ? join('yyyy', 'MMM', 'dd') : join('d', 'MMM', year(c)));
  else if (/\p{L}/u.test(a + b)) return [];
  else if (a.length === 4) ways.push(join('yyyy', 'MM', 'dd'));
  else if (c.length === 3) return [];
  else {
    ways.push(join('dd', 'MM', year(c)));
    // A date with points is written day first wherever it is written.
    if (separator !== '.') ways.push(join('MM', 'dd', year(c)));
    if (c.length === 2 && a.length === 2 && separator !== '.') ways.push(join('yy', 'MM', 'dd'));
  }
  return ways.map((format) => ({ format, part, likeNumbers: false }));
}

const EARLIEST = Date.UTC(2000, 0, 1);
const LATEST = Date.UTC(2060, 0, 1);

/**
 * The ways in which a column's cells can be read as times, those that read most first.
 * @param cells in the order of the rows
 */
export function timeReadings(cells: readonly string[], decimal: string): TimeReading[] {
  const tried = new Map<string, { part: TimeReading['part']; likeNumbers: boolean }>();
  const filled = cells.filter((cell) => cell.trim() !== '');
  const step = Math.max(1, Math.floor(filled.length / 50));
  for (let i = 0; i < filled.length; i += step) {
    for (const { format, part, likeNumbers } of formatsOf(filled[i])) tried.set(format, { part, likeNumbers });
  }
  const readings: TimeReading[] = [];
  for (const [format, { part, likeNumbers }] of tried) {
    const reader: StampReader = stampReader(part === 'time' ? `yyyy-MM-dd ${format}` : format, decimal);
    const times = new Float64Array(cells.length).fill(NaN);
    let read = 0;
    let zoned = 0;
    cells.forEach((cell, i) => {
      if (cell.trim() === '') return;
      const text = part === 'time' ? `1970-01-01 ${cell.trim()}` : cell;
      if (!reader.read(text)) return;
      if (part !== 'time' && !(reader.ms >= EARLIEST && reader.ms < LATEST)) return;
      times[i] = reader.ms;
      read++;
      if (reader.zoned) zoned++;
    });
    // What stands above the first time is preamble and heading.
    const above = times.findIndex((time) => time === time);
    const from = above > MAX_ABOVE ? 0 : above;
    const below = from < 0 ? 0 : cells.slice(from).filter((cell) => cell.trim() !== '').length;
    const share = read === 0 || read < filled.length * 0.3 ? 0 : read / below;
    readings.push({ format, times, share, zoned: zoned > 0 && zoned === read, part, likeNumbers });
  }
  return readings.sort((a, b) => b.share - a.share);
}

/** Preamble and heading are no longer than this among rows of the usual width. */
const MAX_ABOVE = 6;

/** How times follow each other. */
export interface Pace {
  /** The step that occurs most, in milliseconds, without regard to its direction. */
  step: number;
  /** The share of steps that are that one. */
  regular: number;
  /** The sum of all steps' lengths over that of the whole span: 1 for a file in order. */
  wander: number;
  /** The ninth tenth of steps over the first: 1 for an even file, large where rows come when something happens. */
  spread: number;
  /** The share of the span that the usual step would fill with as many rows. */
  filled: number;
  /** 1 oldest first, -1 newest first, 0 neither. */
  way: 1 | -1 | 0;
  distinct: number;
}

/** @param groups times of rows that are neighbours */
export function paceOf(groups: readonly Float64Array[]): Pace {
  const counts = new Map<number, number>();
  let ups = 0;
  let downs = 0;
  let length = 0;
  let low = Infinity;
  let high = -Infinity;
  let total = 0;
  let last = NaN;
  const distinct = new Set<number>();
  for (const times of groups) {
    let before = NaN;
    for (const time of times) {
      if (time !== time) continue;
      distinct.add(time);
      low = Math.min(low, time);
      high = Math.max(high, time);
      if (last === last) length += Math.abs(time - last);
      last = time;
      const step = Math.abs(time - before);
      if (step > 0) {
        counts.set(step, (counts.get(step) ?? 0) + 1);
        if (time > before) ups++;
        else downs++;
        total++;
      }
      before = time;
    }
  }
  const [step, count] = [...counts].sort((a, b) => b[1] - a[1] || a[0] - b[0])[0] ?? [0, 0];
  const ordered = [...counts].sort((a, b) => a[0] - b[0]);
  const tenth = (share: number): number => {
    let seen = 0;
    return ordered.find(([, n]) => (seen += n) >= share * total)?.[0] ?? 0;
  };
  const way = ups > 0.9 * total && total > 0 ? 1 : downs > 0.9 * total && total > 0 ? -1 : 0;
  return {
    step,
    regular: total === 0 ? 0 : count / total,
    spread: total === 0 ? 1 : tenth(0.9) / Math.max(tenth(0.1), 1),
    wander: high > low ? length / (high - low) : 1,
    filled: high > low ? Math.min(1, (step * (distinct.size - 1)) / (high - low)) : 1,
    way,
    distinct: distinct.size,
  };
}

/** Whether all times of a column are midnights. */
export function onlyDays(times: Float64Array): boolean {
  return times.every((time) => time !== time || time % DAY_MS === 0);
}
