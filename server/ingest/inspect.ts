import type { ColumnPlan, Inspection } from '../../shared/api/plan.ts';
import { type InspectContext, inspectSample, noLog, shapeOfFile } from '../../shared/columns/inspect/inspect.ts';
import { LogRefused } from '../../shared/columns/refusal.ts';
import { type FileSummary, sampleOf, Summariser } from './summary.ts';
import { unpacked } from './unpack.ts';

export type { InspectContext } from '../../shared/columns/inspect/inspect.ts';
export type { FileSummary } from './summary.ts';

async function* one(bytes: Uint8Array): AsyncGenerator<Uint8Array> {
  yield bytes;
}

/**
 * How a file would be read.
 * @param source the file's bytes
 * @param fileName as uploaded
 * @param ctx the property
 * @param given a plan to look at the file with; without one it is found
 */
export async function inspectBytes(
  source: Uint8Array | AsyncIterable<Uint8Array>,
  fileName: string,
  ctx: InspectContext,
  given?: ColumnPlan,
): Promise<Inspection & { summary: FileSummary }> {
  const summariser = new Summariser(fileName);
  let refused: LogRefused | null = null;
  try {
    for await (const chunk of unpacked(source instanceof Uint8Array ? one(source) : source)) summariser.push(chunk);
  } catch (error) {
    if (!(error instanceof LogRefused)) throw error;
    refused = error;
  }
  const summary = summariser.end();
  if (refused) {
    summary.refusal = refused.reason;
    summary.refusalLine = refused.line;
  }
  return { ...inspectSummary(summary, ctx, given), summary };
}

/** The same from a summary, without the bytes: pure and quick, for corrections. */
export function inspectSummary(summary: FileSummary, ctx: InspectContext, given?: ColumnPlan): Inspection {
  if (summary.refusal !== null) return noLog(summary.refusal, summary.refusalLine);
  try {
    return inspectSample(sampleOf(summary, given?.encoding), ctx, given);
  } catch (error) {
    if (error instanceof LogRefused) return noLog(error.reason, error.line);
    if (error instanceof RangeError && given) return noLog(`There is no encoding named "${given.encoding}".`);
    throw error;
  }
}

/** A key that files of one shape share, for saved column plans: `null` where nothing was understood. */
export function shapeKey(summary: FileSummary): string | null {
  if (summary.refusal !== null) return null;
  try {
    return shapeOfFile(sampleOf(summary));
  } catch (error) {
    if (error instanceof LogRefused) return null;
    throw error;
  }
}
