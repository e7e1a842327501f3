import { CHANNELS, SIGNED_CHANNELS, type Channel } from '../units/channels.ts';
import { PIECE, type LogLayer, type Trace, type TraceRun } from './layer.ts';
import { type Pieces, piecesOf, type RegisterNotes } from './pieces.ts';
import { LogRows } from './samples.ts';
import { closeGaps, type SeamNotes } from './seams.ts';
import { firstAfter, type Segment, sideOf, type Source, speakers, spoken, trimEdges } from './spans.ts';
import { integralOf } from './sums.ts';

/** What was told while the readings became traces. */
export interface Told {
  channel: Channel;
  what: 'fault value' | 'register reset' | 'register rollover' | 'conflict';
  /** The instant of the first of them, ms. */
  at: number;
  count: number;
}

export interface TraceSet {
  traces: Map<Channel, Trace>;
  told: Told[];
  /** Register steps of more than 31 days that end in the span, kWh (or m³) per channel: of the total only. */
  beyondKwh: Map<Channel, number>;
}

export interface Span {
  /** Instants in ms, `to` excluded. */
  from: number;
  to: number;
}

/**
 * How many UTC days before and after a span must be given with it, so that pieces at its edges are whole. A register
 * read more seldom needs, besides, the nearest layer with a reading of it on either side, from however far: such layers
 * are given along with the others.
 */
export const MARGIN_DAYS = 2;

const EVER: Span = { from: -Infinity, to: Infinity };

/**
 * The effective series of every channel: each log's readings become pieces of time, then one log at a time speaks
 * (the rule of spans), and where logs meet their neighbouring readings are joined. The result depends on the set of
 * layers alone, not on their order in the list.
 *
 * @param layers all layers in the span and its margin, any order; arrays of the result may share their memory
 * @param span bounds what is told, so that neighbouring spans tell nothing twice
 */
export function effectiveTraces(layers: readonly LogLayer[], span: Span = EVER): TraceSet {
  const set: TraceSet = { traces: new Map(), told: [], beyondKwh: new Map() };
  const logs = rowsByLog(layers);
  for (const channel of CHANNELS) {
    const sources: Source[] = [];
    for (const rows of logs) {
      for (const [from, sign] of ORIGINS[channel] ?? [[channel, 0]]) {
        const source = sourceOf(rows, from, sign, from === channel, set.told, span);
        if (source) sources.push(source);
      }
    }
    const trace = traceOf(channel, sources, set, span);
    if (trace) set.traces.set(channel, trace);
  }
  return set;
}

function rowsByLog(layers: readonly LogLayer[]): LogRows[] {
  const byLog = new Map<number, LogLayer[]>();
  for (const layer of layers) {
    const own = byLog.get(layer.log);
    if (own) own.push(layer);
    else byLog.set(layer.log, [layer]);
  }
  return [...byLog].sort(([a], [b]) => a - b).map(([, own]) => new LogRows(own));
}

/** `grid` is split reading by reading: what is positive is import, what is negative export. A column of its own comes first. */
const ORIGINS: Partial<Record<Channel, [from: Channel, sign: -1 | 0 | 1][]>> = {
  import: [
    ['grid', 1],
    ['import', 0],
  ],
  export: [
    ['grid', -1],
    ['export', 0],
  ],
};

function sourceOf(
  rows: LogRows,
  channel: Channel,
  sign: -1 | 0 | 1,
  telling: boolean,
  told: Told[],
  span: Span,
): Source | null {
  const samples = rows.samples(channel);
  if (!samples?.n) return null;
  const notes: RegisterNotes = { resets: [], rollovers: [] };
  const pieces = piecesOf(samples, SIGNED_CHANNELS.has(channel), notes);
  if (telling) {
    const { faults } = samples;
    if (faults.count && inside(faults.at, span)) told.push({ channel, what: 'fault value', ...faults });
    tell(told, channel, 'register reset', notes.resets, span);
    tell(told, channel, 'register rollover', notes.rollovers, span);
  }
  return {
    // Within one log a column of the channel's own speaks before the part of a signed one.
    order: samples.log + (sign === 0 ? 0.5 : 0),
    intervalSeconds: samples.intervalSeconds,
    samples,
    pieces: sign === 0 ? pieces : oneSide(pieces, sign),
    sign,
    mayFall: SIGNED_CHANNELS.has(channel),
  };
}

function oneSide(p: Pieces, sign: -1 | 1): Pieces {
  const side = (values: Float64Array) => {
    const out = new Float64Array(p.length);
    for (let i = 0; i < p.length; i++) out[i] = sideOf(values[i], sign);
    return out;
  };
  const v0 = side(p.v0);
  return { ...p, v0, v1: p.v1 === p.v0 ? v0 : side(p.v1) };
}

function inside(at: number, { from, to }: Span): boolean {
  return at >= from && at < to;
}

function tell(told: Told[], channel: Channel, what: Told['what'], instants: readonly number[], span: Span): void {
  const here = [...new Set(instants)].filter((at) => inside(at, span)).sort((a, b) => a - b);
  if (here.length) told.push({ channel, what, at: here[0], count: here.length });
}

function traceOf(channel: Channel, all: readonly Source[], { told, beyondKwh }: TraceSet, span: Span): Trace | null {
  if (!all.length) return null;
  // Volumes and energies cannot be mixed: what the latest log counts in is kept.
  const { volumetric } = all[all.length - 1].samples;
  const sources = all.filter(({ samples }) => samples.volumetric === volumetric);
  const [only] = sources;
  let segments: Segment[];
  let pieces: Pieces;
  if (sources.length === 1) {
    pieces = only.pieces;
    segments = [{ source: only, from: -Infinity, to: Infinity }];
  } else {
    const conflicts: number[] = [];
    trimEdges(sources);
    segments = speakers(sources, (from, to, speaks, silent) => {
      if (inside(from, span) && differ(speaks, silent, from, to)) conflicts.push(from);
    });
    tell(told, channel, 'conflict', conflicts, span);
    pieces = spoken(segments);
  }
  const notes: SeamNotes = { beyond: [], resets: [] };
  pieces = closeGaps(pieces, sources, notes);
  tell(told, channel, 'register reset', notes.resets, span);
  for (const { at, amount } of notes.beyond)
    if (inside(at, span)) beyondKwh.set(channel, (beyondKwh.get(channel) ?? 0) + amount);
  if (!pieces.length) return null;
  for (let i = 0; i < pieces.length; i++) pieces.flags[i] &= PIECE.assumed | PIECE.spread;
  // Readings that meet only at seams, one to a file: no log speaks by itself.
  if (!segments.length) segments = [{ source: sources[sources.length - 1], from: -Infinity, to: Infinity }];
  const main = mainOf(segments);
  return {
    channel,
    ...pieces,
    intervalSeconds: main.intervalSeconds,
    volumetric,
    kind: main.samples.kind,
    runs: runsOf(segments),
  };
}

/** Two logs differ where their amounts over the same time do, by more than digits. */
function differ(a: Source, b: Source, from: number, to: number): boolean {
  const [x, y] = [a, b].map(({ pieces }) => integralOf(pieces, firstAfter(pieces, from), from, to));
  return Math.abs(x - y) > 1e-6 * Math.max(Math.abs(x), Math.abs(y)) + 1e-6;
}

/** The source that speaks longest. */
function mainOf(segments: readonly Segment[]): Source {
  const long = new Map<Source, number>();
  for (const { source, from, to } of segments) long.set(source, (long.get(source) ?? 0) + Math.min(to - from, 1e15));
  let main = segments[0].source;
  for (const [source, ms] of long) if (ms > (long.get(main) ?? 0)) main = source;
  return main;
}

function runsOf(segments: readonly Segment[]): TraceRun[] {
  return segments.map(({ source, from, to }) => ({
    from,
    to,
    log: source.samples.log,
    intervalSeconds: source.intervalSeconds,
    kind: source.samples.kind,
  }));
}
