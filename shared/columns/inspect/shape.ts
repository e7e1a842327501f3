import { PER_DAY } from '../layout.ts';
import type { NumberReader } from '../number.ts';
import type { SampleRow } from './sample.ts';
import type { TimeChoice } from './time-columns.ts';
import { headingWords, isUnit, unitOf } from './words.ts';

export type Shape =
  | { kind: 'wide' }
  | { kind: 'long'; name: number; value: number; unit: number | null }
  | { kind: 'acrossDay'; first: number; perDay: number; name: number | null; sections?: Sections };

/** Rows of days that stand below title rows. */
export interface Sections {
  /** The name of each row's section; empty where it is not known. */
  of: Map<SampleRow, string>;
  units: Map<string, string>;
}

function share(rows: readonly SampleRow[], c: number, test: (cell: string) => boolean): number {
  let filled = 0;
  let good = 0;
  for (const { cells } of rows) {
    const cell = cells[c] ?? '';
    if (cell.trim() === '') continue;
    filled++;
    if (test(cell)) good++;
  }
  return filled === 0 ? 0 : good / filled;
}

/** Whether the rows have one value, one channel or one day each. */
export function shapeOf(
  rows: readonly SampleRow[],
  width: number,
  time: TimeChoice,
  header: readonly string[] | null,
  numbers: NumberReader,
): Shape {
  const used = rows.slice(0, 2000);
  const free = Array.from({ length: width }, (_, c) => c).filter((c) => !time.columns.includes(c));
  const numeric = free.filter(
    (c) => share(used, c, (cell) => numbers.isMissing(cell) || numbers.read(cell) === 'number') > 0.9,
  );
  const names = free.filter((c) => {
    const words = new Set(used.map(({ cells }) => (cells[c] ?? '').trim()));
    return (
      !numeric.includes(c) &&
      words.size <= 40 &&
      [...words].every((word) => /\p{L}/u.test(word) && word.length <= 60) &&
      words.size * 2 <= used.length
    );
  });
  if (time.days && numeric.length >= 23) {
    // The longest run of neighbouring columns of numbers holds the day.
    let first = numeric[0];
    let best = { first, length: 1 };
    let length = 1;
    for (let i = 1; i < numeric.length; i++) {
      if (numeric[i] === numeric[i - 1] + 1) length++;
      else {
        first = numeric[i];
        length = 1;
      }
      if (length > best.length) best = { first, length };
    }
    const filled = used
      .map(({ cells }) => cells.slice(best.first).filter((cell) => cell.trim() !== '').length)
      .sort((a, b) => a - b);
    const usual = filled[Math.floor(filled.length / 2)];
    const perDay = PER_DAY.find((n) => n === usual) ?? PER_DAY.findLast((n) => n <= best.length);
    if (perDay !== undefined) {
      const name = names.find((c) => !isUnit(used[0]?.cells[c] ?? '')) ?? null;
      return { kind: 'acrossDay', first: best.first, perDay, name };
    }
  }
  const values = numeric.filter((c) => {
    const words = headingWords(header?.[c] ?? '');
    return new Set(used.map(({ cells }) => cells[c])).size > 2 || !words.has('other');
  });
  const wordsOf = (c: number): string[] => [...new Set(used.map(({ cells }) => (cells[c] ?? '').trim().toLowerCase()))];
  const generic = (c: number): boolean =>
    /^(?:val|wert|mess|amount|reading|lectura|valor|waarde)/i.test(header?.[c]?.trim() ?? '');
  const value = values.find(generic) ?? values[0];
  if (value === undefined) return { kind: 'wide' };
  const name = names.find((c) => {
    const words = wordsOf(c);
    if (words.every((word) => isUnit(word))) return false;
    // One name alone heads a column that has no name of its own.
    return words.length >= 2 ? repeats(used, time, words.length) : generic(value) && values.length === 1;
  });
  if (name !== undefined) {
    const unit = names.find((c) => c !== name && wordsOf(c).every((word) => isUnit(word))) ?? null;
    return { kind: 'long', name, value, unit };
  }
  return { kind: 'wide' };
}

/**
 * Finds title rows among rows of days: rows without a day, right above rows with one, that bear a name each.
 * @param all the rows from the beginning of the file
 * @param days the rows of days
 */
export function sectionsOf(
  all: readonly SampleRow[],
  days: readonly SampleRow[],
  first: number,
): (Sections & { name: number }) | null {
  const isDay = new Set(days);
  const titles = all.filter((row, i) => !isDay.has(row) && i + 1 < all.length && isDay.has(all[i + 1]));
  if (titles.length === 0) return null;
  const width = Math.max(...titles.map(({ cells }) => cells.length));
  for (let name = first; name < width; name++) {
    const names = titles.map(({ cells }) => (cells[name] ?? '').trim());
    if (new Set(names).size < names.length || !names.every((text) => /\p{L}/u.test(text) && !isUnit(text))) continue;
    const units = new Map(titles.map(({ cells }, i) => [names[i], cells.find((cell) => unitOf(cell) !== null) ?? '']));
    const of = new Map<SampleRow, string>();
    let current = '';
    for (const row of all) {
      if (isDay.has(row)) of.set(row, current);
      else current = titles.includes(row) ? names[titles.indexOf(row)] : '';
    }
    return { name, of, units };
  }
  return null;
}

/** Whether times come several times over, as often as there are names. */
function repeats(rows: readonly SampleRow[], time: TimeChoice, names: number): boolean {
  const seen = new Set<number>();
  let count = 0;
  for (let i = 0; i < rows.length; i++) {
    const at = time.times[i];
    if (at !== at) continue;
    seen.add(at);
    count++;
  }
  return names >= 2 && seen.size <= count * 0.75;
}
