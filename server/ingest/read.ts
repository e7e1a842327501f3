import type { ColumnPlan, RowProblem } from '../../shared/api/plan.ts';
import type { Layer } from '../../shared/energy/layer.ts';

export { LogRefused } from '../../shared/columns/refusal.ts';

/** The bytes of a file; a function, called again, gives them again from the start. */
export type Source = AsyncIterable<Uint8Array> | (() => AsyncIterable<Uint8Array>);

export interface LogSink {
  /** A whole UTC day of the log; its arrays are the receiver's to keep. No day comes twice (see `restart`). */
  layer(layer: Layer): void | Promise<void>;
  /** A row not taken. `line` counts from 1; `column` is null where the row as a whole is meant. */
  rejected(line: number, column: string | null, reason: string, text: string): void;
  /** Bytes of the file read so far. */
  progress?(bytes: number): void;
  /**
   * Everything given so far is void and comes again from the beginning. Called when rows turn out not to be in order
   * of time, and only where the source is a function; a sink that has it is given days as soon as they are whole,
   * one that has it not is given them all at the end.
   */
  restart?(): void;
}

export interface ReadResult {
  rows: { read: number; accepted: number; rejected: number; unchanged: number };
  /** First and last instant read, as RFC 3339 in UTC. */
  from: string | null;
  to: string | null;
  /** Nominal interval (median step) of each column of the plan, in seconds; 0 where it has fewer than two readings. */
  intervals: number[];
  problems: RowProblem[];
  /** Rows that took the fast path. */
  fastRows: number;
}

/**
 * Reads a log by its plan.
 * @param source the bytes of the file
 * @param plan how its columns are to be read
 * @param ctx the property's zone
 * @param sink takes layers and rejected rows
 * @throws LogRefused if nothing of the file can be read this way
 */
export async function readLog(
  source: Source,
  plan: ColumnPlan,
  ctx: { timeZone: string },
  sink: LogSink,
): Promise<ReadResult> {
  void [source, plan, ctx, sink];
  throw new Error('Reading is being built.');
}
