import type { ColumnMeaning, Layer, LayerColumn } from '../energy/layer.ts';
import { DAY_MS } from '../time/civil.ts';
import { MAX_SCALE, PLAIN, POWER10 } from './number.ts';
import { StepCounter } from './steps.ts';

/** No value of the column has come yet on that day. */
const UNSET = -2;

/** The steps between instants as runs: step, count, step, count… */
function runsOf(instants: Float64Array, backwards: boolean): number[] {
  const runs: number[] = [];
  const way = backwards ? -1 : 1;
  let at = backwards ? instants.length - 1 : 0;
  let step = NaN;
  let count = 0;
  for (let i = 1; i < instants.length; i++, at += way) {
    const next = instants[at + way] - instants[at];
    if (next === step) count++;
    else {
      if (count > 0) runs.push(step, count);
      step = next;
      count = 1;
    }
  }
  if (count > 0) runs.push(step, count);
  return runs;
}

/** Copies one column out of rows; false if a value is missing. */
function transpose(rows: Float64Array, from: number, stride: number, values: Float64Array): boolean {
  let full = true;
  for (let i = 0, at = from; i < values.length; i++, at += stride) {
    const value = rows[at];
    if (value !== value) full = false;
    values[i] = value;
  }
  return full;
}

/** A row belongs to a day that was handed over as whole: the rows are not in order of time. */
export class OutOfOrder extends Error {
  constructor() {
    super('A row belongs to a day that was already handed over.');
    this.name = 'OutOfOrder';
  }
}

/** The rows of one UTC day as they come: per row the instant and one value per column. */
interface DayRows {
  utcDay: number;
  rows: Float64Array;
  /** Numbers of `rows` in use. */
  used: number;
  /** Digits after the decimal mark per column, `PLAIN` or `UNSET`. */
  scales: Int8Array;
  last: number;
  ascending: boolean;
}

/**
 * Gathers rows into layers, one per UTC day. Rows may come in any order. Values are kept as scaled integers with the
 * most digits that the day's values were written with; where these do not fit 2^53 the day's column is of doubles.
 */
export class Collector {
  /** Rows that said again what was there. */
  unchanged = 0;
  /** Rows that said otherwise at an instant that was there. */
  replaced = 0;
  from = Infinity;
  to = -Infinity;

  private readonly stride: number;
  private readonly days = new Map<number, DayRows>();
  private readonly spare: Float64Array[] = [];
  private readonly steps: StepCounter[];
  private finished: Layer[] = [];
  private day: DayRows | null = null;
  private dayFrom = Infinity;
  private dayTo = -Infinity;
  /** 1 when days come in order of time, -1 when newest first, 0 while there is one day. */
  private way = 0;
  private frontier = NaN;
  private rowsPerDay = 16;

  /**
   * @param meanings what each column's numbers are
   * @param hold keeps all days to the end, so that any order is right; else days are handed over once rows are past
   *   them by a day, and a row that comes too late throws `OutOfOrder`
   */
  constructor(
    private readonly meanings: readonly ColumnMeaning[],
    private readonly hold: boolean,
  ) {
    this.stride = meanings.length + 1;
    this.steps = meanings.map(() => new StepCounter());
  }

  /**
   * Takes one row.
   * @param utcMs its instant
   * @param mantissas per column, NaN where there is none
   * @param decimals per column
   */
  add(utcMs: number, mantissas: Float64Array, decimals: Int8Array): void {
    if (!(utcMs >= this.dayFrom && utcMs < this.dayTo)) this.open(utcMs);
    const day = this.day as DayRows;
    const { stride } = this;
    let at = day.used;
    if (at + stride > day.rows.length) this.grow(day);
    const { rows, scales } = day;
    if (utcMs <= day.last) day.ascending = false;
    day.last = utcMs;
    rows[at++] = utcMs;
    for (let c = 0; c < stride - 1; c++) {
      let value = mantissas[c];
      if (decimals[c] !== scales[c] && value === value) value = this.fit(day, c, value, decimals[c]);
      rows[at++] = value;
    }
    day.used = at;
  }

  /** The layers that have become whole since the last call. */
  take(): Layer[] {
    const { finished } = this;
    this.finished = [];
    return finished;
  }

  /** Hands over what is left. */
  end(): void {
    const left = [...this.days.keys()].sort((a, b) => (this.way < 0 && !this.hold ? b - a : a - b));
    for (const utcDay of left) this.close(utcDay);
    this.day = null;
  }

  /** Nominal interval of each column in seconds. */
  intervals(): number[] {
    return this.steps.map((step) => step.medianSeconds());
  }

  private open(utcMs: number): void {
    const utcDay = Math.floor(utcMs / DAY_MS);
    this.dayFrom = utcDay * DAY_MS;
    this.dayTo = this.dayFrom + DAY_MS;
    if (this.day) this.rowsPerDay = Math.max(1, this.day.used / this.stride);
    const known = this.days.get(utcDay);
    if (known) {
      this.day = known;
      return;
    }
    if (!this.hold) this.advance(utcDay);
    this.day = {
      utcDay,
      rows: this.spare.pop() ?? new Float64Array(this.stride * Math.ceil(this.rowsPerDay * 1.01)),
      used: 0,
      scales: new Int8Array(this.stride - 1).fill(UNSET),
      last: -Infinity,
      ascending: true,
    };
    this.days.set(utcDay, this.day);
  }

  /** Hands over the days that lie more than one behind. */
  private advance(utcDay: number): void {
    if (this.frontier !== this.frontier) {
      this.frontier = utcDay;
      return;
    }
    if (this.way === 0) this.way = utcDay > this.frontier ? 1 : -1;
    if ((utcDay - this.frontier) * this.way < 0) throw new OutOfOrder();
    this.frontier = utcDay;
    for (const old of this.days.keys()) {
      if ((utcDay - old) * this.way > 1) this.close(old);
    }
  }

  private grow(day: DayRows): void {
    const larger = new Float64Array(Math.max(day.rows.length * 2, this.stride * 4));
    larger.set(day.rows.subarray(0, day.used));
    day.rows = larger;
  }

  /** Brings a value to the column's scale of the day, or the column to the value's. */
  private fit(day: DayRows, column: number, mantissa: number, decimals: number): number {
    const scale = day.scales[column];
    if (scale === UNSET) {
      day.scales[column] = decimals;
      return mantissa;
    }
    if (scale === PLAIN) return decimals > 0 ? mantissa / POWER10[decimals] : mantissa;
    if (decimals === PLAIN || decimals > MAX_SCALE) {
      this.rescale(day, column, PLAIN);
      return decimals > 0 ? mantissa / POWER10[decimals] : mantissa;
    }
    if (decimals > scale) {
      this.rescale(day, column, decimals);
      return day.scales[column] === PLAIN ? mantissa / POWER10[decimals] : mantissa;
    }
    const scaled = mantissa * POWER10[scale - decimals];
    if (Math.abs(scaled) <= Number.MAX_SAFE_INTEGER) return scaled;
    this.rescale(day, column, PLAIN);
    return mantissa / POWER10[decimals];
  }

  private rescale(day: DayRows, column: number, wanted: number): void {
    const { rows, used } = day;
    const { stride } = this;
    const scale = day.scales[column];
    let target = wanted;
    if (wanted !== PLAIN) {
      const factor = POWER10[wanted - scale];
      for (let at = column + 1; at < used; at += stride) {
        if (Math.abs(rows[at] * factor) > Number.MAX_SAFE_INTEGER) target = PLAIN;
      }
    }
    day.scales[column] = target;
    if (target === PLAIN) for (let at = column + 1; at < used; at += stride) rows[at] /= POWER10[scale];
    else for (let at = column + 1; at < used; at += stride) rows[at] *= POWER10[target - scale];
  }

  private close(utcDay: number): void {
    const day = this.days.get(utcDay) as DayRows;
    this.days.delete(utcDay);
    if (!day.ascending) this.sort(day);
    const { stride } = this;
    const { rows } = day;
    const count = day.used / stride;
    const instants = new Float64Array(count);
    for (let i = 0, at = 0; i < count; i++, at += stride) instants[i] = rows[at];
    this.from = Math.min(this.from, instants[0]);
    this.to = Math.max(this.to, instants[count - 1]);
    const backwards = this.way < 0 && !this.hold;
    const runs = runsOf(instants, backwards);
    const columns = this.meanings.map((meaning, c): LayerColumn => {
      const values = new Float64Array(count);
      const full = transpose(rows, c + 1, stride, values);
      const steps = this.steps[c];
      if (full) {
        steps.add(instants[backwards ? count - 1 : 0]);
        for (let i = 0; i < runs.length; i += 2) steps.addRun(runs[i], runs[i + 1]);
      } else {
        for (let i = 0; i < count; i++) {
          const k = backwards ? count - 1 - i : i;
          if (values[k] === values[k]) steps.add(instants[k]);
        }
      }
      const scale = day.scales[c];
      return { ...meaning, scale: scale === PLAIN ? null : Math.max(scale, 0), values };
    });
    this.finished.push({ utcDay, instants, columns });
    if (!this.hold && this.spare.length < 3) this.spare.push(rows);
  }

  /** Orders the rows by instant, keeping the order of rows at one instant, of which the later wins cell by cell. */
  private sort(day: DayRows): void {
    const { stride } = this;
    const { rows, used } = day;
    const count = used / stride;
    const order = new Uint32Array(count);
    for (let i = 0; i < count; i++) order[i] = i;
    order.sort((a, b) => rows[a * stride] - rows[b * stride] || a - b);
    const sorted = new Float64Array(used);
    let end = 0;
    for (let i = 0; i < count; i++) {
      const from = order[i] * stride;
      const before = end - stride;
      if (end > 0 && sorted[before] === rows[from]) {
        let same = true;
        let over = false;
        for (let c = 1; c < stride; c++) {
          const value = rows[from + c];
          if (value !== value || value === sorted[before + c]) continue;
          same = false;
          if (sorted[before + c] === sorted[before + c]) over = true;
          sorted[before + c] = value;
        }
        if (same) this.unchanged++;
        else if (over) this.replaced++;
        continue;
      }
      for (let c = 0; c < stride; c++) sorted[end + c] = rows[from + c];
      end += stride;
    }
    day.rows = sorted;
    day.used = end;
    day.ascending = true;
  }
}
