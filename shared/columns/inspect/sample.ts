import type { ColumnPlan } from '../../api/plan.ts';
import { Lines } from '../lines.ts';
import { Records } from '../records.ts';

/** What inspection looks at of a file: decoded lines from its head, from places further on and from its end. */
export interface TextSample {
  fileName: string;
  encoding: string;
  /** The first lines; all of them if `whole`. */
  head: readonly string[];
  /** Groups of neighbouring lines from further on, in the order of the file. */
  further: readonly (readonly string[])[];
  /** Whether the head is the whole file. */
  whole: boolean;
  /** The number of lines of the file, null if they were not counted. */
  lineCount: number | null;
  /** Whether the last line of the head, if whole, has no line end. */
  torn: boolean;
}

/** One record of the sample with its line; lines further on are not counted and are null. */
export interface SampleRow {
  cells: string[];
  line: number | null;
  text: string;
}

/** Rows in the order of the file; groups of rows that are not neighbours stand apart. */
export interface SampleRows {
  head: SampleRow[];
  groups: SampleRow[][];
}

/** Cuts text into lines, as the readers do. */
export function linesOf(text: string): { lines: string[]; torn: boolean } {
  const lines: string[] = [];
  let torn = false;
  const cutter = new Lines((line, _, open) => {
    lines.push(line);
    torn = open;
  });
  cutter.push(text);
  cutter.end();
  return { lines, torn };
}

/** Cuts lines into records by a delimiter. @param first the number of the first line, null if not known */
export function recordsOf(
  lines: readonly string[],
  delimiter: ColumnPlan['delimiter'],
  first: number | null,
): SampleRow[] {
  const rows: SampleRow[] = [];
  const records = new Records(delimiter, (cells, line, text) => {
    rows.push({ cells, line: first === null ? null : line, text });
  });
  lines.forEach((line, i) => records.push(line, (first ?? 1) + i));
  records.end();
  return rows;
}

export const isBlank = (row: SampleRow): boolean => row.cells.every((cell) => cell.trim() === '');
