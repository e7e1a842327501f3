import { TextDecoder } from 'node:util';
import type { ColumnPlan, RowProblem } from '../../shared/api/plan.ts';
import { OutOfOrder } from '../../shared/columns/collect.ts';
import { Feed } from '../../shared/columns/feed.ts';
import { LogRefused } from '../../shared/columns/refusal.ts';
import type { Layer } from '../../shared/energy/layer.ts';
import { FastReader, isPlain } from './fast.ts';
import { type ByteReader, GeneralReader } from './general.ts';
import { unpacked } from './unpack.ts';

export { LogRefused } from '../../shared/columns/refusal.ts';

/** The bytes of a file; a function, called again, gives them again from the start. */
export type Source = AsyncIterable<Uint8Array> | (() => AsyncIterable<Uint8Array>);

export interface LogSink {
  /** A whole UTC day of the log; its arrays are the receiver's to keep. No day comes twice (see `restart`). */
  layer(layer: Layer): void | Promise<void>;
  /** A row not taken. `line` counts from 1; `column` is null where the row as a whole is meant. */
  rejected(line: number, column: string | null, reason: string, text: string): void;
  /** Bytes of the file read so far, unpacked. */
  progress?(bytes: number): void;
  /**
   * Everything given so far is void and comes again from the beginning. Called when rows turn out not to be in order
   * of time, and only where the source is a function; a sink that has it is given days as soon as they are whole
   * (newest first, if the file runs so), one that has it not is given them all at the end, in order of time.
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

/** Which reader to use; `fast` and `general` are for tests and benchmarks that hold one to the other. */
export type ReaderChoice = 'best' | 'general';

/**
 * Reads a log by its plan.
 * @param source the bytes of the file
 * @param plan how its columns are to be read
 * @param _ctx the property's zone; stamps are read in the plan's own
 * @param sink takes layers and rejected rows
 * @param choice `general` leaves the fast path out
 * @throws LogRefused if nothing of the file can be read this way
 */
export async function readLog(
  source: Source,
  plan: ColumnPlan,
  _ctx: { timeZone: string },
  sink: LogSink,
  choice: ReaderChoice = 'best',
): Promise<ReadResult> {
  if (typeof source !== 'function') return once(source, plan, sink, true, choice);
  if (!sink.restart) return once(source(), plan, sink, true, choice);
  try {
    return await once(source(), plan, sink, false, choice);
  } catch (error) {
    if (!(error instanceof OutOfOrder)) throw error;
    sink.restart();
    return once(source(), plan, sink, true, choice);
  }
}

/** The decoder of a plan's encoding, which a byte-order mark overrules. */
function decoderFor(encoding: string, head: Uint8Array): TextDecoder {
  let label = encoding;
  if (head[0] === 0xef && head[1] === 0xbb && head[2] === 0xbf) label = 'utf-8';
  else if (head[0] === 0xff && head[1] === 0xfe) label = 'utf-16le';
  else if (head[0] === 0xfe && head[1] === 0xff) label = 'utf-16be';
  try {
    return new TextDecoder(label, { ignoreBOM: true });
  } catch {
    throw new LogRefused(`There is no encoding named "${encoding}".`);
  }
}

/** How many bytes at the head are a byte-order mark. */
function markLength(head: Uint8Array): number {
  if (head[0] === 0xef && head[1] === 0xbb && head[2] === 0xbf) return 3;
  return (head[0] === 0xff && head[1] === 0xfe) || (head[0] === 0xfe && head[1] === 0xff) ? 2 : 0;
}

async function once(
  source: AsyncIterable<Uint8Array>,
  plan: ColumnPlan,
  sink: LogSink,
  hold: boolean,
  choice: ReaderChoice,
): Promise<ReadResult> {
  const feed = new Feed(plan, hold, (line, column, reason, text) => sink.rejected(line, column, reason, text));
  let reader: ByteReader | null = null;
  let bytes = 0;
  const begin = (head: Uint8Array): ByteReader => {
    const decoder = decoderFor(plan.encoding, head);
    const fast = choice === 'best' && isPlain(plan) && !decoder.encoding.startsWith('utf-16');
    const made = fast ? new FastReader(plan, feed, decoder) : new GeneralReader(feed, decoder);
    made.push(head.subarray(markLength(head)));
    return made;
  };
  const deliver = async (): Promise<void> => {
    for (const layer of feed.interpreter?.take() ?? []) await sink.layer(layer);
  };
  let head: Uint8Array | null = null;
  for await (const chunk of unpacked(source)) {
    bytes += chunk.length;
    if (reader) reader.push(chunk);
    else {
      // The mark may come in pieces.
      head = head ? Buffer.concat([head, chunk]) : chunk;
      if (head.length >= 3) reader = begin(head);
    }
    await deliver();
    sink.progress?.(bytes);
  }
  reader ??= begin(head ?? new Uint8Array(0));
  reader.end();
  const interpreter = feed.end();
  await deliver();
  const { collector } = interpreter;
  const iso = (ms: number): string | null => (Number.isFinite(ms) ? new Date(ms).toISOString() : null);
  return {
    rows: interpreter.rows(),
    from: iso(collector.from),
    to: iso(collector.to),
    intervals: collector.intervals(),
    problems: interpreter.told(),
    fastRows: interpreter.fastRows,
  };
}
