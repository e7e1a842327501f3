import type { Log } from '../../../shared/api/log.ts';
import type { ColumnPlan, Inspection } from '../../../shared/api/plan.ts';
import { fetchOriginal, inspectLog } from '../../api/logs.ts';

/** Enough of a file to see how it is read; a whole year of minutes need not travel for a preview. */
const ENOUGH = 4_000_000;

/**
 * Looks at a log's original by another plan, without keeping anything.
 * @returns a function that may be called at each change; the original is fetched once
 */
export function lookAgain(
  propertyId: string,
  log: Pick<Log, 'id' | 'fileName'>,
): (plan: ColumnPlan) => Promise<Inspection> {
  let file: Promise<File> | null = null;
  return async (plan) => {
    file ??= fetchOriginal(log.id).then((whole) => new File([whole.slice(0, ENOUGH)], log.fileName));
    try {
      return (await inspectLog(propertyId, await file, plan)).answer;
    } catch (error) {
      file = null;
      throw error;
    }
  };
}
