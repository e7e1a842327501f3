import type { ColumnPlan, ColumnReading, Inspection, Question, RowProblem } from '../../api/plan.ts';
import { Feed } from '../feed.ts';
import { Interpreter } from '../interpret.ts';
import { columnName } from '../layout.ts';
import { numberOf } from '../number.ts';
import { LogRefused } from '../refusal.ts';
import { isBlank, recordsOf, type SampleRow, type TextSample } from './sample.ts';

const SHOWN_ROWS = 12;

/** One row alone, as the plan reads it; below a row that may be the title of its section. */
function readRow(
  plan: ColumnPlan,
  header: readonly string[] | null,
  row: SampleRow,
  title: SampleRow | null = null,
): { at: number | null; values: (number | null)[] } {
  const interpreter = new Interpreter(plan, header, row.cells, true, () => {});
  if (title) interpreter.row(title.cells, title.line ?? 0, title.text);
  interpreter.row(row.cells, row.line ?? 0, row.text);
  interpreter.end();
  const [layer] = interpreter.take();
  if (!layer) return { at: null, values: plan.columns.map(() => null) };
  const values = layer.columns.map(({ scale, values: [value] }) =>
    value === value ? numberOf(value, scale ?? 0) : null,
  );
  return { at: layer.instants[0], values };
}

/** The instant of the last row that the plan can read, looked for from the end. */
function lastInstant(plan: ColumnPlan, header: readonly string[] | null, rows: readonly SampleRow[]): number | null {
  for (let i = rows.length - 1; i >= Math.max(0, rows.length - 20); i--) {
    if (isBlank(rows[i])) continue;
    const { at } = readRow(plan, header, rows[i]);
    if (at !== null) return at;
  }
  return null;
}

/**
 * How a plan reads the sample: first rows as they stand and as read, and what it would reject.
 * @param columns how each column was understood, null where the plan was given
 */
export function previewOf(
  sample: TextSample,
  plan: ColumnPlan,
  questions: Question[],
  confidence: number,
  columns: ColumnReading[] | null,
): Inspection {
  const records = recordsOf(sample.head, plan.delimiter, 1);
  const header =
    plan.headerLine === null
      ? null
      : (records.find(({ line }) => line !== null && line >= (plan.headerLine ?? 0))?.cells ?? null);
  const base = {
    header: [...(header ?? [])],
    lines: [],
    readings: [],
    rows: null,
    from: null,
    to: null,
    columns: columns ?? [],
  };
  const refused = (error: unknown): Inspection => {
    if (!(error instanceof LogRefused)) throw error;
    const lines = records.slice(0, SHOWN_ROWS).map(({ line, cells }) => ({ line: line ?? 0, cells }));
    const problem: RowProblem = { line: error.line, column: error.column, reason: error.reason, count: 1 };
    return { plan, confidence: 0, questions, sample: { ...base, lines }, problems: [problem] };
  };
  try {
    const feed = new Feed(plan, true, () => {});
    const last = sample.head.length - 1;
    sample.head.forEach((text, i) => {
      if (i < last || sample.whole) feed.line(text, i + 1, sample.whole && sample.torn && i === last);
    });
    const interpreter = feed.end();
    const counts = interpreter.rows();
    const { collector } = interpreter;
    const after = dataRows(records, plan);
    const shown = after.slice(0, SHOWN_ROWS);
    let title: SampleRow | null = null;
    const read = shown.map((row) => {
      const got = { row, ...readRow(plan, header, row, title) };
      if (got.at === null) title = row;
      return got;
    });
    const further = sample.further.at(-1);
    const end = further ? lastInstant(plan, header, recordsOf(further, plan.delimiter, null)) : null;
    const ends = [collector.from, collector.to, ...(end === null ? [] : [end])].filter((at) => Number.isFinite(at));
    const iso = (at: number | null): string | null => (at === null ? null : new Date(at).toISOString());
    return {
      plan,
      confidence,
      questions,
      sample: {
        ...base,
        lines: shown.map(({ line, cells }) => ({ line: line ?? 0, cells })),
        readings: read.map(({ row, at, values }) => ({ line: row.line ?? 0, at: iso(at), values })),
        rows: sample.whole
          ? counts.read
          : sample.lineCount === null
            ? null
            : sample.lineCount - sample.head.length + 1 + counts.read,
        from: ends.length > 0 ? iso(Math.min(...ends)) : null,
        to: ends.length > 0 ? iso(Math.max(...ends)) : null,
        columns:
          columns ??
          plan.columns.map((column) => ({
            column: columnName(column.column, header),
            number: numberOfColumn(column.column, header),
            channel: column.channel,
            confidence: 1,
            reason: 'as the plan says',
          })),
      },
      problems: interpreter.told(),
    };
  } catch (error) {
    return refused(error);
  }
}

function numberOfColumn(ref: string | number, header: readonly string[] | null): number {
  if (typeof ref === 'number') return ref;
  return (header?.findIndex((name) => name.trim().toLowerCase() === ref.trim().toLowerCase()) ?? -1) + 1;
}

/** The records below heading, row of units and skipped rows. */
function dataRows(records: readonly SampleRow[], plan: ColumnPlan): SampleRow[] {
  let rows =
    plan.headerLine === null
      ? [...records]
      : records.filter(({ line }) => line !== null && line > (plan.headerLine ?? 0));
  if (plan.unitRow) rows = rows.slice(rows.findIndex((row) => !isBlank(row)) + 1);
  return rows.slice(plan.skipRows ?? 0).filter((row) => !isBlank(row));
}
