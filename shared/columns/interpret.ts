import type { ColumnPlan, RowProblem } from '../api/plan.ts';
import type { Layer } from '../energy/layer.ts';
import { DAY_MS } from '../time/civil.ts';
import { type Zone, zoneOf } from '../time/zone.ts';
import { LocalClock } from './clock.ts';
import { Collector } from './collect.ts';
import { columnName, type Layout, layoutOf, meaningsOf } from './layout.ts';
import { NumberReader } from './number.ts';
import { Problems } from './problems.ts';
import { stampReader, type StampReader } from './stamp.ts';
import { stateWords } from './states.ts';

/** Readings outside these years are of a clock that was not set. */
export const EARLIEST = Date.UTC(1990, 0, 1);
export const LATEST = Date.UTC(2100, 0, 1);

export type OnRejected = (line: number, column: string | null, reason: string, text: string) => void;

export interface Counts {
  read: number;
  accepted: number;
  rejected: number;
  unchanged: number;
}

const TIME_FORMS: Record<string, string> = {
  iso: 'an ISO date and time',
  epochSeconds: 'seconds since 1970',
  epochMilliseconds: 'milliseconds since 1970',
  excelSerial: 'a spreadsheet day number',
};

/**
 * Gives the rows of one file their meaning by a column plan: cells to readings, readings to the collector. Both readers,
 * the general one and the fast path, end here; the fast path hands over every line that it has a doubt about.
 */
export class Interpreter {
  readonly collector: Collector;
  readonly clock: LocalClock;
  readonly layout: Layout;
  readonly counts: Counts = { read: 0, accepted: 0, rejected: 0, unchanged: 0 };
  /** Rows that the fast path took. */
  fastRows = 0;

  private readonly zone: Zone;
  private readonly stamps: StampReader;
  private readonly numbers: NumberReader;
  private readonly problems = new Problems();
  private readonly mantissas: Float64Array;
  private readonly decimals: Int8Array;
  private readonly states: (Map<string, 0 | 1> | null)[];
  private readonly names: Map<string, number>;
  private readonly labels: string[];
  private readonly heading: readonly string[] | null;
  private readonly daysAcross = new Map<string, string>();
  /** Rows of days may stand in sections, whose title rows bear the name where the days' rows bear a value. */
  private readonly sections: boolean;
  private section: number | undefined;
  private title: readonly string[] | null = null;
  /** The cells that a row has. */
  readonly width: number;
  /** The cells that a whole row has at the least: a day of 23 hours is shorter. */
  private readonly leastWidth: number;

  /**
   * @param plan the column plan
   * @param header the heading's cells, null if it has none
   * @param firstRow the first row's cells
   * @param hold keeps all days to the end, see `Collector`
   * @throws LogRefused if the plan does not fit the file
   */
  constructor(
    private readonly plan: ColumnPlan,
    header: readonly string[] | null,
    firstRow: readonly string[],
    hold: boolean,
    private readonly onRejected: OnRejected,
  ) {
    this.layout = layoutOf(plan, header, firstRow);
    this.zone = zoneOf(plan.time.zone);
    this.stamps = stampReader(plan.time.format, plan.decimal);
    this.numbers = new NumberReader(plan.decimal, plan.thousands, plan.missing);
    this.collector = new Collector(meaningsOf(plan), hold);
    const place = (utc: number, mantissas: Float64Array, decimals: Int8Array): void =>
      this.collector.add(utc, mantissas, decimals);
    this.clock = new LocalClock(this.zone, place, plan.time.stamp === 'end');
    this.mantissas = new Float64Array(plan.columns.length).fill(NaN);
    this.decimals = new Int8Array(plan.columns.length);
    this.states = plan.columns.map((column) => (column.kind === 'state' ? stateWords(column.on, column.off) : null));
    this.names = new Map(plan.columns.map((column, i) => [String(column.column).trim().toLowerCase(), i]));
    this.labels = plan.columns.map((column) => columnName(column.column, header));
    this.heading = header;
    this.width = this.layout.width ?? firstRow.length;
    const { firstAt, perDay } = this.layout;
    this.sections = firstAt >= 0 && this.layout.nameAt >= firstAt;
    this.leastWidth = firstAt < 0 ? this.width : firstAt + Math.ceil((perDay * 23) / 24);
  }

  /** Takes the next row of data. `torn` says that the file ends in it without a line end. */
  row(cells: string[], line: number, text: string, torn = false): void {
    if (cells.every((cell) => cell === '' || cell.trim() === '')) return;
    this.counts.read++;
    if (cells.length !== this.width && !(this.sections && this.heading === null)) {
      if (cells.length > this.width && cells.slice(this.width).some((cell) => cell.trim() !== ''))
        return this.reject(line, null, `The row has more cells than the ${this.width} of the heading.`, text);
      if (torn && cells.length < this.leastWidth)
        return this.reject(line, null, 'The file ends in the middle of this row.', text);
    }
    if (this.isHeading(cells)) return this.reject(line, null, 'The heading stands here again.', text);
    if (!this.stamps.read(this.timeText(cells))) {
      if (this.sections && this.isTitle(cells)) {
        this.counts.read--;
        return;
      }
      const form = TIME_FORMS[this.plan.time.format] ?? this.plan.time.format;
      const column = columnName(this.plan.time.columns[0], this.layout.header);
      return this.reject(line, column, `The time cannot be read as ${form}.`, text);
    }
    if (!(this.stamps.ms >= EARLIEST && this.stamps.ms < LATEST))
      return this.reject(line, null, 'The time lies outside the years 1990 to 2099.', text);
    if (this.layout.firstAt >= 0) this.across(cells, line, text);
    else if (this.layout.nameAt >= 0) this.long(cells, line, text);
    else this.wide(cells, line, text);
  }

  /** Says that there are no more rows. */
  end(): void {
    this.clock.end();
    this.collector.end();
  }

  /** Layers that have become whole. */
  take(): Layer[] {
    return this.collector.take();
  }

  /** Rows by what became of them: `read` is the sum of the other three. */
  rows(): Counts {
    const repeats = this.layout.firstAt < 0 ? this.collector.unchanged : 0;
    const { read, accepted, rejected, unchanged } = this.counts;
    return { read, accepted: accepted - repeats, rejected, unchanged: unchanged + repeats };
  }

  /** What is to be told of the file. */
  told(): RowProblem[] {
    const { problems, clock, collector } = this;
    const all = new Problems();
    for (const { line, column, reason, count } of problems.list()) all.add(line, column, reason, count);
    if (clock.assumed > 0)
      all.add(
        null,
        null,
        `Rows in the hour that ${this.zone.name} repeats in autumn do not show which pass they are of: taken as the first.`,
        clock.assumed,
      );
    if (clock.unclear > 0)
      all.add(
        null,
        null,
        `Rows in the hour that ${this.zone.name} repeats in autumn are not in order of time: taken in the order in which they stand.`,
        clock.unclear,
      );
    if (collector.replaced > 0)
      all.add(
        null,
        null,
        'Rows give another value for a time that the file already had: the last one is taken.',
        collector.replaced,
      );
    return all.list();
  }

  private reject(line: number, column: string | null, reason: string, text: string): void {
    this.counts.rejected++;
    this.problems.add(line, column, reason);
    this.onRejected(line, column, reason, text.length > 500 ? `${text.slice(0, 500)}…` : text);
  }

  /** Whether the row is the heading again. */
  private isHeading(cells: readonly string[]): boolean {
    const { heading } = this;
    return heading !== null && cells.length === heading.length && heading.every((cell, i) => cell === cells[i]);
  }

  private timeText(cells: readonly string[]): string {
    const { time } = this.layout;
    let text = cells[time[0]] ?? '';
    for (let i = 1; i < time.length; i++) text = `${text.trim()} ${(cells[time[i]] ?? '').trim()}`;
    return text;
  }

  /** Reads a cell into a column's slot; false if it holds no usable value. */
  private value(cell: string | undefined, column: number, line: number): boolean {
    this.mantissas[column] = NaN;
    const words = this.states[column];
    if (words) {
      const state = cell === undefined ? undefined : words.get(cell.trim().toLowerCase());
      if (state !== undefined) {
        this.mantissas[column] = state;
        this.decimals[column] = 0;
        return true;
      }
      if (this.numbers.isMissing(cell)) return false;
      if (this.numbers.read(cell) === 'number' && (this.numbers.mantissa === 0 || this.asOne())) {
        this.mantissas[column] = this.numbers.mantissa === 0 ? 0 : 1;
        this.decimals[column] = 0;
        return true;
      }
      this.problems.add(line, this.labels[column], 'A cell holds a word that means neither on nor off.');
      return false;
    }
    const kind = this.numbers.read(cell, this.plan.columns[column].unit);
    if (kind === 'number') {
      this.mantissas[column] = this.numbers.mantissa;
      this.decimals[column] = this.numbers.decimals;
      return true;
    }
    if (kind === 'invalid') this.problems.add(line, this.labels[column], 'A cell is no number.');
    return false;
  }

  /** Whether the number just read is one, however written. */
  private asOne(): boolean {
    return this.numbers.decimals >= 0 && this.numbers.mantissa === 10 ** this.numbers.decimals;
  }

  private wide(cells: readonly string[], line: number, text: string): void {
    const { places } = this.layout;
    let usable = 0;
    for (let c = 0; c < places.length; c++) if (this.value(cells[places[c]], c, line)) usable++;
    if (usable === 0) return this.reject(line, null, 'The row has no usable value.', text);
    this.place(line, text, 0);
  }

  private long(cells: readonly string[], line: number, text: string): void {
    const name = cells[this.layout.nameAt]?.trim().toLowerCase() ?? '';
    const column = this.names.get(name);
    if (column === undefined) {
      this.leave(line);
      return;
    }
    this.mantissas.fill(NaN);
    if (!this.value(cells[this.layout.valueAt], column, line))
      return this.reject(line, this.labels[column], 'The row has no usable value.', text);
    this.place(line, text, column);
  }

  private place(line: number, text: string, key: number): void {
    const { ms, zoned } = this.stamps;
    if (zoned) this.collector.add(ms, this.mantissas, this.decimals);
    else if (!this.clock.add(ms, this.mantissas, this.decimals, key))
      return this.reject(line, null, this.leftOut(), text);
    this.counts.accepted++;
  }

  /** A row of a name that the plan leaves out: not kept, and no fault of the row. */
  private leave(line: number): void {
    this.counts.accepted++;
    this.problems.add(line, null, 'Rows of names that the column plan leaves out are not kept.');
  }

  private leftOut(): string {
    return `This local time does not exist: clocks in ${this.zone.name} went forward over it.`;
  }

  /** Takes a row without a day as a title of the rows below it; false if its name is none of the plan's. */
  private isTitle(cells: readonly string[]): boolean {
    const column = this.names.get(cells[this.layout.nameAt]?.trim().toLowerCase() ?? '');
    if (column !== undefined) {
      this.section = column;
      this.title = cells;
      return true;
    }
    // A title like the last one, of a name that is none of the plan's: what follows belongs to no column of it.
    if (this.title && (cells[0] === this.title[0] || cells.length === this.title.length)) this.section = undefined;
    return false;
  }

  /** A row that holds a whole day. */
  private across(cells: readonly string[], line: number, text: string): void {
    const { firstAt, nameAt, perDay } = this.layout;
    let column: number | undefined = 0;
    if (this.sections) column = this.section;
    else if (nameAt >= 0) column = this.names.get(cells[nameAt]?.trim().toLowerCase() ?? '');
    if (column === undefined) {
      this.leave(line);
      return;
    }
    const { ms, zoned } = this.stamps;
    if (!zoned && ms % DAY_MS !== 0) return this.reject(line, null, 'The row names a time of day, not a day.', text);
    // Without a heading nothing tells further values from what else a row may end with.
    const most = this.heading === null ? perDay : Math.ceil((perDay * 25) / 24);
    const values = cells.slice(firstAt, firstAt + most);
    const key = `${ms} ${column}`;
    const said = values.join('\u0000');
    if (this.daysAcross.get(key) === said) {
      this.counts.unchanged++;
      return;
    }
    this.daysAcross.set(key, said);
    const slots = this.slots(ms, zoned, values);
    const step = DAY_MS / perDay;
    const late = this.plan.time.stamp === 'end' ? step : 0;
    this.mantissas.fill(NaN);
    let usable = 0;
    for (let i = 0; i < values.length; i++) {
      if (!this.value(values[i], column, line)) continue;
      const start = slots(i);
      if (start !== start) {
        this.problems.add(line, null, i < perDay ? this.leftOut() : 'The row has more values than the day has hours.');
        continue;
      }
      this.collector.add(start + late, this.mantissas, this.decimals);
      usable++;
    }
    this.mantissas[column] = NaN;
    if (usable === 0) return this.reject(line, null, 'The row has no usable value.', text);
    this.counts.accepted++;
  }

  /**
   * The starts of a day's slots. On a day of 23 or 25 hours the values run with the hours passed if there are as many
   * as the day has, else with the clock, where the repeated hour stands once.
   */
  private slots(ms: number, zoned: boolean, values: readonly string[]): (i: number) => number {
    const { perDay } = this.layout;
    const step = DAY_MS / perDay;
    if (zoned) return (i) => (i < perDay ? ms + i * step : NaN);
    const offset = this.clock.dayOffset(ms);
    if (offset === offset) return (i) => (i < perDay ? ms - offset + i * step : NaN);
    const { start, hours } = this.zone.dayBounds(new Date(ms).toISOString().slice(0, 10));
    const passed = Math.round((hours * perDay) / 24);
    const filled = values.findLastIndex((cell) => this.numbers.read(cell) === 'number') + 1;
    if (hours === 24 || (hours < 24 && filled <= passed) || (hours > 24 && filled > perDay))
      return (i) => (i < passed ? start + i * step : NaN);
    return (i) => {
      if (i >= perDay) return NaN;
      const [first, second] = this.zone.localToUtc(ms + i * step);
      if (second !== undefined) this.clock.assumed++;
      return first ?? NaN;
    };
  }
}
