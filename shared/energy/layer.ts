import type { Channel, Kind, Unit } from '../units/channels.ts';

/**
 * What gives the numbers of one stored column their meaning. All of it is part of a block's hashed
 * content, so that two blocks are the same only if they say the same.
 */
export interface ColumnMeaning {
  channel: Channel;
  kind: Kind;
  unit: Unit;
  /** Multiplies the value as written; -1 turns a column round. */
  sign: 1 | -1;
  /** Multiplies the value as written, after sign (1 unless a column plan says otherwise). */
  factor: number;
  /** Where the stamp stands in its interval. Registers, levels and states hold at the stamp itself. */
  stamp: 'start' | 'end' | 'instant';
  /** `toNext`: logged on change, a value holds until the next row of its log. */
  hold: 'toNext' | null;
  /** `dark`: a logger that sleeps at night; the dark counts as covered zero, assumed. */
  sleeps: 'dark' | null;
  /** Nominal interval in seconds: the median step of this column in its log. */
  intervalSeconds: number;
}

/** One column of one log on one UTC day. Several columns of a log may share a channel: they are added. */
export interface LayerColumn extends ColumnMeaning {
  /** Digits after the decimal mark: the value as written is `values[i] / 10 ** scale`. `null`: plain doubles. */
  scale: number | null;
  /** Scaled integers (or doubles) in row order of `instants`; NaN is missing. */
  values: Float64Array;
}

/** All columns of one log on one UTC day: a layer. Instants ascend strictly. */
export interface Layer {
  /** Days since 1970-01-01 UTC. */
  utcDay: number;
  /** Milliseconds since the epoch. */
  instants: Float64Array;
  columns: LayerColumn[];
}

/** A layer with the order in which its log was accepted; a later log speaks before an earlier one. */
export interface LogLayer extends Layer {
  log: number;
}

/**
 * One channel as pieces of time that do not overlap: within a piece the value runs straight from
 * `v0` at `t0` to `v1` at `t1`. Time in no piece is unknown, not zero.
 * Units: electricity and fuel in W (mean power over the piece), temperature in °C, state 0 or 1.
 * Arrays may share memory with one another (`v0` and `v1` of means are one array): they are for reading only.
 * Fuel written as volume stays a volume: then `volumetric` is true and values are m³/h.
 */
export interface Trace {
  channel: Channel;
  t0: Float64Array;
  t1: Float64Array;
  v0: Float64Array;
  v1: Float64Array;
  /** Bit set per piece, see PIECE. */
  flags: Uint8Array;
  /** The number of pieces in use; the arrays may be longer. */
  length: number;
  /** Nominal interval in seconds of the log that speaks most in this trace. */
  intervalSeconds: number;
  volumetric: boolean;
  kind: Kind;
  /** Which log speaks when, in order of time. */
  runs: TraceRun[];
}

/** A stretch of a trace in which one log speaks; the outermost may be unbounded. */
export interface TraceRun {
  from: number;
  to: number;
  log: number;
  intervalSeconds: number;
  kind: Kind;
}

export const PIECE = {
  /** Covered by assumption (a logger that sleeps in the dark). */
  assumed: 1,
  /** A register step over six hours: adds to totals, not to coverage, completeness, checks or pictures. */
  spread: 2,
} as const;
