import { CHANNELS, QUANTITY, SIGNED_CHANNELS, type Channel, type Kind } from '../units/channels.ts';
import { isVolume, toBase } from '../units/convert.ts';
import { type LayerColumn, type LogLayer, type Trace } from './layer.ts';
import { type Pieces, type SampleNotes, HOUR_MS, newPieces, piecesOf, pushPiece } from './pieces.ts';
import { dropFaults } from './sensor-faults.ts';

/** What was told while the readings became traces. */
export interface Told {
  channel: Channel;
  what:
    'fault value' | 'register reset' | 'register rollover' | 'negative set to zero' | 'negative unknown' | 'conflict';
  at: number;
  count: number;
}

export interface TraceSet {
  traces: Map<Channel, Trace>;
  told: Told[];
  /** Register energy over steps of more than 31 days, kWh (or m³) per channel: of the total only. */
  beyondKwh: Map<Channel, number>;
}

/** How many UTC days before and after a span must be given with it, so that pieces at its edges are whole. */
export const MARGIN_DAYS = 2;

/**
 * The effective series of every channel: each log's readings become pieces of time, then one log at a time speaks
 * (the rule of spans): the one accepted later, unless its interval is more than twice as long.
 *
 * @param layers all layers in and around the span, any order
 */
export function effectiveTraces(layers: readonly LogLayer[]): TraceSet {
  const told: Told[] = [];
  const traces = new Map<Channel, Trace>();
  const beyondKwh = new Map<Channel, number>();
  const logs = [...new Set(layers.map((layer) => layer.log))].sort((a, b) => a - b);
  const byLog = new Map(
    logs.map((log) => [log, layers.filter((l) => l.log === log).sort((a, b) => a.utcDay - b.utcDay)] as const),
  );
  for (const channel of CHANNELS) {
    let merged: Pieces | null = null;
    let main: { kind: Kind; interval: number; length: number; volumetric: boolean } | null = null;
    const seams: Seam[] = [];
    for (const log of logs) {
      const own = samplesOf(byLog.get(log) ?? [], channel);
      if (!own || own.n === 0) continue;
      const kept =
        QUANTITY[channel] === 'temperature' ? dropFaults(own.t, own.v, own.n) : { n: own.n, dropped: 0, at: 0 };
      if (kept.dropped) told.push({ channel, what: 'fault value', at: kept.at, count: kept.dropped });
      const notes: SampleNotes = { resets: [], rollovers: [], beyond: 0 };
      const pieces = piecesOf(
        own.t,
        own.v,
        kept.n,
        {
          kind: own.column.kind,
          stamp: own.column.stamp,
          hold: own.column.hold,
          intervalSeconds: own.column.intervalSeconds,
          mayFall: SIGNED_CHANNELS.has(channel),
          digit: own.digit,
          longestHold: QUANTITY[channel] === 'temperature' ? 6 * HOUR_MS : 24 * HOUR_MS,
        },
        own.scale,
        notes,
      );
      for (const at of notes.resets) told.push({ channel, what: 'register reset', at, count: 1 });
      for (const at of notes.rollovers) told.push({ channel, what: 'register rollover', at, count: 1 });
      if (notes.beyond) beyondKwh.set(channel, (beyondKwh.get(channel) ?? 0) + notes.beyond);
      if (own.column.kind === 'register' && kept.n)
        seams.push({ t0: own.t[0], v0: own.v[0], t1: own.t[kept.n - 1], v1: own.v[kept.n - 1], own });
      if (!main || pieces.length > main.length)
        main = {
          kind: own.column.kind,
          interval: own.column.intervalSeconds,
          length: pieces.length,
          volumetric: own.volumetric,
        };
      merged = merged ? overlay(merged, pieces) : pieces;
    }
    if (!merged || !main) continue;
    merged = bridgeSeams(merged, seams);
    traces.set(channel, traceOf(channel, merged, main.interval, main.volumetric, main.kind));
  }
  splitGrid(traces);
  return { traces, told, beyondKwh };
}

interface Seam {
  t0: number;
  v0: number;
  t1: number;
  v1: number;
  own: Samples;
}

interface Samples {
  t: Float64Array;
  v: Float64Array;
  n: number;
  column: LayerColumn;
  /** From the register's or energy's unit to kWh (or m³). */
  scale: number;
  digit: number;
  volumetric: boolean;
}

/** One log's samples of one channel; several columns are added, a row that lacks one of them is missing. */
function samplesOf(layers: readonly LogLayer[], channel: Channel): Samples | null {
  let size = 0;
  let column: LayerColumn | null = null;
  for (const layer of layers)
    for (const c of layer.columns)
      if (c.channel === channel) {
        column ??= c;
        size += layer.instants.length;
        break;
      }
  if (!column) return null;
  const t = new Float64Array(size);
  const v = new Float64Array(size);
  let n = 0;
  let digits = 0;
  for (const layer of layers) {
    const columns = layer.columns.filter((c) => c.channel === channel);
    if (!columns.length) continue;
    const factors = columns.map(
      (c) => (c.sign * c.factor * toBase(c.unit).factor) / (c.scale === null ? 1 : 10 ** c.scale),
    );
    const offset = toBase(column.unit).offset;
    for (const c of columns) digits = Math.max(digits, c.scale ?? 6);
    const rows = layer.instants.length;
    if (columns.length === 1) {
      const values = columns[0].values;
      const f = factors[0];
      const whole = columns[0].scale;
      const pow = whole === null ? 1 : 10 ** whole;
      const g = f * pow;
      for (let i = 0; i < rows; i++) {
        const x = values[i];
        if (x === x) {
          t[n] = layer.instants[i];
          v[n++] = (x / pow) * g + offset;
        }
      }
    } else {
      for (let i = 0; i < rows; i++) {
        let sum = 0;
        for (let k = 0; k < columns.length; k++) sum += columns[k].values[i] * factors[k];
        if (sum === sum) {
          t[n] = layer.instants[i];
          v[n++] = sum + offset;
        }
      }
    }
  }
  const base = Math.abs(column.factor * toBase(column.unit).factor);
  return {
    t,
    v,
    n,
    column,
    scale: QUANTITY[channel] === 'electricity' ? 1000 : isVolume(column.unit) ? 1 : 1000,
    digit: 10 ** -digits * base,
    volumetric: isVolume(column.unit),
  };
}

/**
 * The rule of spans for two lists of pieces: `late` speaks where it covers, unless its interval is more than twice as
 * long; then the finer does.
 */
export function overlay(early: Pieces, late: Pieces): Pieces {
  if (!early.length) return late;
  if (!late.length) return early;
  const out = newPieces(early.length + late.length);
  let i = 0;
  let j = 0;
  let at = Math.min(early.t0[0], late.t0[0]);
  let last: Pieces | null = null;
  let lastIndex = -1;
  for (;;) {
    while (i < early.length && early.t1[i] <= at) i++;
    while (j < late.length && late.t1[j] <= at) j++;
    const earlyStart = i < early.length ? early.t0[i] : Infinity;
    const lateStart = j < late.length ? late.t0[j] : Infinity;
    if (earlyStart === Infinity && lateStart === Infinity) return out;
    if (earlyStart > at && lateStart > at) {
      at = Math.min(earlyStart, lateStart);
      continue;
    }
    const useLate = lateStart <= at && (earlyStart > at || late.step[j] <= 2 * early.step[i]);
    const winner = useLate ? late : early;
    const index = useLate ? j : i;
    const otherStart = useLate ? earlyStart : lateStart;
    const otherEnd = otherStart <= at ? (useLate ? early.t1[i] : late.t1[j]) : otherStart;
    const end = Math.min(winner.t1[index], otherEnd);
    if (last === winner && lastIndex === index) extend(winner, index, end, out);
    else cut(winner, index, at, end, out);
    last = winner;
    lastIndex = index;
    at = end;
  }
}

/** The value of a piece at an instant within it. */
function valueAt({ t0, t1, v0, v1 }: Pieces, i: number, at: number): number {
  if (at === t0[i]) return v0[i];
  if (at === t1[i]) return v1[i];
  return v0[i] + ((v1[i] - v0[i]) * (at - t0[i])) / (t1[i] - t0[i]);
}

function extend(p: Pieces, i: number, to: number, out: Pieces): void {
  out.t1[out.length - 1] = to;
  out.v1[out.length - 1] = valueAt(p, i, to);
}

function cut(p: Pieces, i: number, from: number, to: number, out: Pieces): void {
  pushPiece(out, from, to, valueAt(p, i, from), valueAt(p, i, to), p.flags[i], p.step[i]);
}

/** Where one log of a register ends and another begins with nothing between, the difference is still energy. */
function bridgeSeams(merged: Pieces, seams: Seam[]): Pieces {
  if (seams.length < 2) return merged;
  let result = merged;
  const ordered = [...seams].sort((a, b) => a.t0 - b.t0);
  for (let k = 0; k + 1 < ordered.length; k++) {
    const a = ordered[k];
    const b = ordered[k + 1];
    if (b.t0 <= a.t1 || a.own.column.unit !== b.own.column.unit) continue;
    const notes: SampleNotes = { resets: [], rollovers: [], beyond: 0 };
    const step = piecesOf(
      Float64Array.of(a.t1, b.t0),
      Float64Array.of(a.v1, b.v0),
      2,
      {
        kind: 'register',
        stamp: 'instant',
        hold: null,
        intervalSeconds: a.own.column.intervalSeconds,
        mayFall: false,
        digit: a.own.digit,
        longestHold: 0,
      },
      a.own.scale,
      notes,
    );
    if (step.length) result = overlay(step, result);
  }
  return result;
}

/** `grid` is split reading by reading: what is positive is import, what is negative export. */
function splitGrid(traces: Map<Channel, Trace>): void {
  const grid = traces.get('grid');
  if (!grid) return;
  const { length, t0, t1, flags } = grid;
  const step = new Float64Array(length).fill(grid.intervalSeconds);
  for (const [channel, sign] of GRID_PARTS) {
    const part = (values: Float64Array) => Float64Array.from(values.subarray(0, length), (v) => Math.max(v * sign, 0));
    const pieces: Pieces = { t0, t1, v0: part(grid.v0), v1: part(grid.v1), flags, step, length };
    const own = traces.get(channel);
    const merged = own
      ? overlay(pieces, { ...own, step: new Float64Array(own.length).fill(own.intervalSeconds) })
      : pieces;
    traces.set(channel, traceOf(channel, merged, grid.intervalSeconds, false, grid.kind));
  }
}

const GRID_PARTS = [
  ['import', 1],
  ['export', -1],
] as const;

function traceOf(channel: Channel, p: Pieces, intervalSeconds: number, volumetric: boolean, kind: Kind): Trace {
  const { t0, t1, v0, v1, flags, length } = p;
  return { channel, t0, t1, v0, v1, flags, length, intervalSeconds, volumetric, kind };
}
