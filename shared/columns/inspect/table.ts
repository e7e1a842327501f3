import type { ColumnPlan } from '../../api/plan.ts';
import { NumberReader } from '../number.ts';
import { stateWords } from '../states.ts';
import { isBlank, recordsOf, type SampleRow, type TextSample } from './sample.ts';
import { formatsOf } from './times.ts';
import { isUnit, wordsOf } from './words.ts';

const DELIMITERS = [',', ';', '\t', '|', '  '];

const states = stateWords(['open', 'closed', 'ouvert', 'ferme', 'auf', 'zu'], []);
const points = new NumberReader('.', ',');
const commas = new NumberReader(',', '.');

const isNumber = (cell: string): boolean => points.read(cell) === 'number' || commas.read(cell) === 'number';
const isTime = (cell: string): boolean => formatsOf(cell).some(({ likeNumbers }) => !likeNumbers);

/** Whether a cell is what rows of readings hold: a number, a time, a state or nothing. */
function isTyped(cell: string): boolean {
  return isNumber(cell) || isTime(cell) || points.isMissing(cell) || states.has(cell.trim().toLowerCase());
}

/** The width that most rows have, and the share that has it. */
function usualWidth(rows: readonly SampleRow[]): { width: number; share: number } {
  const counts = new Map<number, number>();
  for (const { cells } of rows) counts.set(cells.length, (counts.get(cells.length) ?? 0) + 1);
  const [width, count] = [...counts].sort((a, b) => b[1] - a[1] || b[0] - a[0])[0] ?? [0, 0];
  return { width, share: rows.length === 0 ? 0 : count / rows.length };
}

/** How much like a table of readings the lines are when cut by a delimiter; 0 for not at all. */
function likeness(lines: readonly string[], delimiter: string): number {
  const rows = recordsOf(lines, delimiter, 1).filter((row) => !isBlank(row));
  const { width, share } = usualWidth(rows);
  if (width < 2) return 0;
  const usual = rows.filter(({ cells }) => cells.length === width);
  let typed = 0;
  for (let c = 0; c < width; c++) {
    const cells = usual.map((row) => row.cells[c]);
    const fit = cells.filter(isTyped).length / cells.length;
    // A column of names that come again and again is as good.
    const few = new Set(cells).size <= Math.max(2, cells.length / 3);
    typed += Math.max(fit, few ? 0.6 : 0);
  }
  return share * (typed / width) + Math.min(width, 10) * 0.005;
}

/** How the lines are cut; null if they are no table. */
export function findDelimiter(sample: TextSample): string | null {
  const lines = [...sample.head.slice(0, 300), ...sample.further.slice(0, 5).flat().slice(0, 50)];
  const [best] = DELIMITERS.map((delimiter) => ({ delimiter, like: likeness(lines, delimiter) }))
    // Blanks stand inside times and names too: they part columns only where nothing else does.
    .map((way, _, all) =>
      way.delimiter === '  ' && all.some(({ like }) => like >= 0.5 && like !== way.like) ? { ...way, like: 0 } : way,
    )
    .sort((a, b) => b.like - a.like);
  return best.like >= 0.35 ? best.delimiter : null;
}

export interface Decimals {
  decimal: '.' | ',';
  thousands?: string;
  /** Whether the numbers would make as good sense with the marks the other way round. */
  doubtful: boolean;
}

/** The decimal mark, from all cells that are numbers by one way or the other. */
export function findDecimals(rows: readonly SampleRow[], delimiter: string): Decimals {
  const proof = { '.': 0, ',': 0 };
  const grouped = { '.': 0, ',': 0, ' ': 0, "'": 0 };
  const open = { '.': 0, ',': 0 };
  let plainLarge = 0;
  let plain = 0;
  for (const { cells } of rows) {
    for (const cell of cells) {
      const text = cell
        .trim()
        .replace(/^[+−-]/, '')
        .replace(/\s*[a-z°%³]+$/i, '');
      if (!/^[\d.,' \u00a0\u202f]*\d[\d.,' \u00a0\u202f]*$/.test(text) || isTime(cell)) continue;
      if (/^\d+$/.test(text)) {
        plain++;
        if (text.length > 3) plainLarge++;
        continue;
      }
      const last = Math.max(text.lastIndexOf('.'), text.lastIndexOf(','));
      const mark = last < 0 ? null : (text[last] as '.' | ',');
      const body = mark === null ? text : text.slice(0, last);
      const other = mark === '.' ? ',' : '.';
      for (const group of ["'", ' '] as const) {
        const pattern = group === ' ' ? /^\d{1,3}(?:[ \u00a0\u202f]\d{3})+$/ : /^\d{1,3}(?:'\d{3})+$/;
        if (pattern.test(body)) grouped[group]++;
      }
      if (mark === null) continue;
      const after = text.length - 1 - last;
      if (body.includes(other)) {
        if (after !== 3 || !body.includes(mark)) proof[mark]++;
        grouped[other]++;
      } else if (body.includes(mark)) {
        grouped[mark]++;
        proof[other]++;
      } else if (after !== 3 || /^0?$/.test(body) || body.length > 3) proof[mark]++;
      else open[mark]++;
    }
  }
  const result = (decimal: '.' | ',', doubtful: boolean): Decimals => {
    const other = decimal === '.' ? ',' : '.';
    const thousands =
      ([other, "'", ' '] as const).find((mark) => grouped[mark] > 0) ?? (open[other] > 0 ? other : undefined);
    return { decimal, doubtful, ...(thousands !== undefined && thousands !== delimiter ? { thousands } : {}) };
  };
  if (proof['.'] > 0 || proof[','] > 0) return result(proof[','] > proof['.'] ? ',' : '.', false);
  const mark = open[','] > open['.'] ? ',' : '.';
  if (open[mark] === 0) return { decimal: '.', doubtful: false };
  // Every marked number has three digits behind the mark: thousands, if small numbers go without.
  return { decimal: mark, doubtful: plain > 0 && plainLarge === 0 };
}

/** Whether a row could be a heading: names, and no readings. */
function isHeading(row: SampleRow, width: number): boolean {
  const filled = row.cells.filter((cell) => cell.trim() !== '');
  if (filled.length < Math.min(2, width) || row.cells.length > width + 1 || filled.length < (width - 1) / 2)
    return false;
  const texts = filled.filter((cell) => !isNumber(cell) && !points.isMissing(cell) && !/^\d{4}-\d\d-\d\dT/.test(cell));
  // Columns across a day are headed by numbers or times.
  return texts.length >= filled.length / 2 || (texts.length > 0 && filled.length > 20);
}

function isUnitRow(row: SampleRow): boolean {
  const filled = row.cells.filter((cell) => cell.trim() !== '');
  return filled.length > 0 && filled.every((cell) => isUnit(cell));
}

export interface Heading {
  headerLine: number | null;
  header: string[] | null;
  unitRow: boolean;
  units: string[];
  skipRows: number;
}

/**
 * The heading above the first row of data.
 * @param rows from the beginning of the file
 * @param first the index of the first row of data
 */
export function findHeading(rows: readonly SampleRow[], first: number, width: number): Heading {
  const none: Heading = { headerLine: null, header: null, unitRow: false, units: [], skipRows: 0 };
  const above = rows.slice(0, first).filter((row) => !isBlank(row));
  const last = above.at(-1);
  const before = above.at(-2);
  if (!last) return { ...none, skipRows: 0 };
  const headed = (row: SampleRow, units: SampleRow | null): Heading => ({
    headerLine: row.line,
    header: row.cells,
    unitRow: units !== null,
    units: units?.cells ?? [],
    skipRows: 0,
  });
  if (before && isUnitRow(last) && isHeading(before, width)) return headed(before, last);
  if (isHeading(last, width)) return headed(last, null);
  // Something stands between: a row that is neither heading nor data.
  for (let i = above.length - 2; i >= 0 && i >= above.length - 6; i--) {
    if (!isHeading(above[i], width)) continue;
    const at = rows.indexOf(above[i]);
    return { ...headed(above[i], null), skipRows: rows.slice(at + 1, first).length };
  }
  return { ...none, skipRows: rows.slice(0, first).length };
}

/** The names of a heading, or their numbers where a name is empty or comes twice. */
export function columnRefs(header: readonly string[] | null, width: number): ColumnPlan['time']['columns'] {
  const clean = (text: string): string => wordsOf(text).join(' ') || text.trim();
  const names = header?.map(clean) ?? [];
  return Array.from({ length: Math.max(width, header?.length ?? 0) }, (_, i) => {
    const name = header?.[i];
    const alone = name !== undefined && name.trim() !== '' && names.filter((other) => other === names[i]).length === 1;
    return alone && name.length <= 300 ? name : i + 1;
  });
}
