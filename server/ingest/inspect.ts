import type { ColumnPlan, Inspection } from '../../shared/api/plan.ts';

/** What of the property helps to understand a file. */
export interface InspectContext {
  timeZone: string;
  latitude: number | null;
  longitude: number | null;
  country: string | null;
}

/** What inspection keeps of a file: enough to look again under another plan without its bytes. Plain JSON. */
export interface FileSummary {
  fileName: string;
  bytes: number;
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
  void [source, fileName, ctx, given];
  throw new Error('Inspection is being built.');
}

/** The same from a summary, without the bytes: pure and quick, for corrections. */
export function inspectSummary(summary: FileSummary, ctx: InspectContext, given?: ColumnPlan): Inspection {
  void [summary, ctx, given];
  throw new Error('Inspection is being built.');
}

/** A key that files of one shape share, for saved column plans: `null` where nothing was understood. */
export function shapeKey(summary: FileSummary): string | null {
  void summary;
  return null;
}
