import { QUANTITY, type Channel, type Kind } from '../units/channels.ts';
import { isVolume, toBase } from '../units/convert.ts';
import type { ColumnMeaning, LayerColumn, LogLayer } from './layer.ts';
import { dropFaults } from './sensor-faults.ts';

/** Instants in ms, ascending; the slot before the first and the one after the last are free for the edges of pieces. */
export interface Timeline {
  slots: Float64Array;
  n: number;
  /** Longest and shortest step, ms; 0 with fewer than two instants. */
  longest: number;
  shortest: number;
}

/** What one log says of one channel: readings in base units, fault values and rows without a value left out. */
export interface Samples {
  log: number;
  time: Timeline;
  /** The instants alone: a view into `time`. */
  t: Float64Array;
  /** W (power), kWh or m³ (energy, register), °C (level), 0 or 1 (state). For several columns their sum. */
  v: Float64Array;
  n: number;
  kind: Kind;
  stamp: ColumnMeaning['stamp'];
  hold: ColumnMeaning['hold'];
  sleeps: ColumnMeaning['sleeps'];
  intervalSeconds: number;
  /** From the unit of an energy or register to Wh, or 1 for volumes. */
  scale: number;
  /** One digit of the display, in the unit of `v`. */
  digit: number;
  volumetric: boolean;
  /** Each column by itself where several are added: counters wrap one by one. */
  parts: Float64Array[];
  faults: { count: number; at: number };
}

/** All layers of one log, in the order of days, with their instants joined once for all channels. */
export class LogRows {
  readonly layers: LogLayer[];
  readonly rows: number;
  private joined: Timeline | null = null;

  constructor(layers: LogLayer[]) {
    this.layers = layers.sort((a, b) => a.utcDay - b.utcDay);
    this.rows = layers.reduce((sum, layer) => sum + layer.instants.length, 0);
  }

  private timeline(): Timeline {
    if (this.joined) return this.joined;
    const slots = new Float64Array(this.rows + 2);
    let at = 1;
    for (const { instants } of this.layers) {
      slots.set(instants, at);
      at += instants.length;
    }
    this.joined = timelineOf(slots, this.rows);
    return this.joined;
  }

  /** This log's readings of a channel, `null` where it has no such column. */
  samples(channel: Channel): Samples | null {
    const first = this.first(channel);
    if (!first) return null;
    const { column, count } = first;
    const parts = Array.from({ length: count }, () => new Float64Array(this.rows));
    const missing = this.fill(parts, channel, column.kind);
    const v = count === 1 ? parts[0] : added(parts);
    const own = missing ? withoutMissing(this.timeline(), v, parts) : this.timeline();
    const faults = QUANTITY[channel] === 'temperature' ? withoutFaults(own, v) : { time: own, count: 0, at: NaN };
    const { time } = faults;
    const volumetric = isVolume(column.unit);
    return {
      log: this.layers[0].log,
      time,
      t: time.slots.subarray(1, time.n + 1),
      v,
      n: time.n,
      kind: column.kind,
      stamp: column.stamp,
      hold: column.hold,
      sleeps: column.sleeps,
      intervalSeconds: column.intervalSeconds,
      scale: volumetric ? 1 : 1000,
      digit: this.digit(channel, column),
      volumetric,
      parts: count > 1 ? parts : [],
      faults,
    };
  }

  /** The first column of a channel, and how many there are of its kind. */
  private first(channel: Channel): { column: LayerColumn; count: number } | null {
    let column: LayerColumn | null = null;
    let count = 0;
    for (const layer of this.layers) {
      let here = 0;
      for (const c of layer.columns) {
        if (c.channel !== channel) continue;
        column ??= c;
        if (c.kind === column.kind) here++;
      }
      if (here > count) count = here;
    }
    return column && { column, count };
  }

  /** Writes each column's values in base units; NaN where a day lacks one of them. Returns whether any is missing. */
  private fill(parts: Float64Array[], channel: Channel, kind: Kind): boolean {
    let missing = 0;
    let row = 0;
    for (const layer of this.layers) {
      const rows = layer.instants.length;
      const columns = layer.columns.filter((c) => c.channel === channel && c.kind === kind);
      parts.forEach((part, k) => {
        if (columns.length === parts.length) missing += convert(columns[k], part, row, rows);
        else missing += part.fill(NaN, row, row + rows).length;
      });
      row += rows;
    }
    return missing > 0;
  }

  private digit(channel: Channel, { kind, factor, unit }: LayerColumn): number {
    let digits = 0;
    for (const layer of this.layers)
      for (const c of layer.columns)
        if (c.channel === channel && c.kind === kind) digits = Math.max(digits, c.scale ?? 6);
    return 10 ** -digits * Math.abs(factor * toBase(unit).factor);
  }
}

/** A column's values in its base unit, written from `at` on. Returns how many are missing. */
function convert(
  { values, scale, sign, factor, unit }: LayerColumn,
  into: Float64Array,
  at: number,
  rows: number,
): number {
  const base = toBase(unit);
  const by = sign * factor * base.factor;
  const { offset } = base;
  // Dividing by the power of ten first gives the very number that was written.
  const power = scale === null ? 1 : 10 ** scale;
  let missing = 0;
  if (by === 1 && offset === 0) {
    for (let i = 0; i < rows; i++) {
      const value = values[i] / power;
      into[at + i] = value;
      if (value !== value) missing++;
    }
    return missing;
  }
  for (let i = 0; i < rows; i++) {
    const value = (values[i] / power) * by + offset;
    into[at + i] = value;
    if (value !== value) missing++;
  }
  return missing;
}

function added(parts: readonly Float64Array[]): Float64Array {
  const sum = Float64Array.from(parts[0]);
  for (let k = 1; k < parts.length; k++) for (let i = 0; i < sum.length; i++) sum[i] += parts[k][i];
  return sum;
}

/** Leaves out rows without a value: `v` and `parts` are packed in place. */
function withoutMissing({ slots, n }: Timeline, v: Float64Array, parts: readonly Float64Array[]): Timeline {
  const kept = new Float64Array(n + 2);
  let at = 0;
  for (let i = 0; i < n; i++) {
    if (v[i] !== v[i]) continue;
    kept[at + 1] = slots[i + 1];
    v[at] = v[i];
    for (const part of parts) part[at] = part[i];
    at++;
  }
  return timelineOf(kept, at);
}

function withoutFaults(time: Timeline, v: Float64Array): { time: Timeline; count: number; at: number } {
  const { slots, n } = time;
  const kept = dropFaults(slots.subarray(1, n + 1), v, n);
  return { time: kept.t ? timelineOf(kept.t, kept.n) : time, count: kept.dropped, at: kept.at };
}

function timelineOf(slots: Float64Array, n: number): Timeline {
  let longest = 0;
  let shortest = n > 1 ? Infinity : 0;
  for (let i = 1; i < n; i++) {
    const step = slots[i + 1] - slots[i];
    if (step > longest) longest = step;
    if (step < shortest) shortest = step;
  }
  return { slots, n, longest, shortest };
}
