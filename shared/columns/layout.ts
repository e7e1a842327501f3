import type { ColumnPlan, ColumnRef } from '../api/plan.ts';
import type { ColumnMeaning } from '../energy/layer.ts';
import { isZone } from '../time/zone.ts';
import { LogRefused } from './refusal.ts';

/** Where a plan's columns stand in a file, as 0-based numbers. */
export interface Layout {
  /** The cells that a row has by its heading; null where there is no heading. */
  width: number | null;
  header: readonly string[] | null;
  time: number[];
  /** Per plan column its place; -1 in long shape, where its name stands in the rows. */
  places: number[];
  nameAt: number;
  valueAt: number;
  firstAt: number;
  perDay: number;
}

const clean = (text: string): string => text.replace(/\s+/g, ' ').trim().toLowerCase();

/** The numbers of values across a day that are in use: hours, half-hours, quarters, ten, five minutes, minutes. */
export const PER_DAY: readonly number[] = [24, 48, 96, 144, 288, 1440];

/** The place of a column. @throws LogRefused if the file has none such, or several of the name. */
function placeOf(ref: ColumnRef, header: readonly string[] | null, line: number | null): number {
  if (typeof ref === 'number') {
    if (header && ref > header.length)
      throw new LogRefused(`The plan names column ${ref}, but the heading has ${header.length} columns.`, line);
    return ref - 1;
  }
  if (!header) {
    if (/^\d{1,4}$/.test(ref) && Number(ref) >= 1) return Number(ref) - 1;
    throw new LogRefused(`The plan names the column "${ref}", but the file has no heading line.`, null, ref);
  }
  for (const same of [(a: string, b: string) => a === b, (a: string, b: string) => clean(a) === clean(b)]) {
    const found = header.flatMap((name, i) => (same(name, ref) ? [i] : []));
    if (found.length === 1) return found[0];
    if (found.length > 1)
      throw new LogRefused(
        `The heading has ${found.length} columns named "${ref}": name the one that is meant by its number.`,
        line,
        ref,
      );
  }
  throw new LogRefused(`The heading in line ${line} has no column "${ref}".`, line, ref);
}

/**
 * Finds a plan's columns in a file.
 * @param header the cells of the heading, null if the plan says that there is none
 * @param firstRow the cells of the first row of data
 * @throws LogRefused if a column is missing
 */
export function layoutOf(plan: ColumnPlan, header: readonly string[] | null, firstRow: readonly string[]): Layout {
  const shape = plan.shape ?? { kind: 'wide' as const };
  const place = (ref: ColumnRef): number => placeOf(ref, header, plan.headerLine);
  const need = (ref: ColumnRef | undefined, what: string): number => {
    if (ref === undefined) throw new LogRefused(`The plan does not say which column holds the ${what}.`);
    return place(ref);
  };
  if (!isZone(plan.time.zone)) throw new LogRefused(`There is no time zone named "${plan.time.zone}".`);
  const layout: Layout = {
    width: header ? header.length : null,
    header,
    time: plan.time.columns.map(place),
    places: [],
    nameAt: -1,
    valueAt: -1,
    firstAt: -1,
    perDay: 0,
  };
  if (shape.kind === 'wide') layout.places = plan.columns.map((column) => place(column.column));
  else {
    layout.places = plan.columns.map(() => -1);
    if (shape.kind === 'long') {
      layout.nameAt = need(shape.nameColumn, 'names');
      layout.valueAt = need(shape.valueColumn, 'values');
    } else {
      layout.firstAt = need(shape.firstColumn, 'first value of the day');
      if (shape.nameColumn !== undefined) layout.nameAt = place(shape.nameColumn);
      else if (plan.columns.length > 1)
        throw new LogRefused('The plan has several columns, but does not say which column of the file names them.');
      const across = (header ?? firstRow).length - layout.firstAt;
      const perDay = shape.perDay ?? PER_DAY.findLast((n) => n <= across);
      if (perDay === undefined || 1440 % perDay !== 0)
        throw new LogRefused(`A day cannot be cut into ${perDay ?? across} equal parts of whole minutes.`);
      layout.perDay = perDay;
    }
  }
  return layout;
}

/** What gives the numbers of each column of a plan their meaning; the interval is known only when all is read. */
export function meaningsOf(plan: ColumnPlan): ColumnMeaning[] {
  return plan.columns.map((column) => ({
    channel: column.channel,
    kind: column.kind,
    unit: column.unit,
    sign: column.sign,
    factor: column.factor ?? 1,
    stamp: column.kind === 'power' || column.kind === 'energy' ? (column.stamp ?? plan.time.stamp) : 'instant',
    hold: column.hold ?? null,
    sleeps: column.sleeps ?? null,
    intervalSeconds: 0,
  }));
}

/** The name of a plan's column for people: its name in the file, or `column 3`. */
export function columnName(ref: ColumnRef, header: readonly string[] | null): string {
  if (typeof ref === 'string') return ref;
  return header?.[ref - 1]?.trim() || `column ${ref}`;
}
