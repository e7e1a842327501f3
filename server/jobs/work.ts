import type { Database, Tx } from '../database/connection.ts';
import { addJob } from './queue.ts';
import { lookUntil } from '../database/notices.ts';

export interface PropertyWork {
  id: number;
  what: 'withdraw' | 'derive';
  log: number | null;
}

/**
 * Asks for the figures to follow a change: a withdrawn log, or a record that is no longer the same. The change and
 * the work stand in one transaction, so that figures can be waited for from that moment on.
 */
export async function askToRefresh(
  tx: Tx,
  propertyId: string,
  what: PropertyWork['what'],
  log: number | null = null,
): Promise<void> {
  await tx.query('insert into property_work (property_id, what, log) values ($1, $2, $3)', [propertyId, what, log]);
  await addJob(
    tx,
    'refreshFigures',
    { propertyId },
    { queueName: `property:${propertyId}`, jobKey: `refresh:${propertyId}` },
  );
}

/** What is to be done at a property, oldest first. */
export function workOf(tx: Tx, propertyId: string): Promise<PropertyWork[]> {
  return tx.query<PropertyWork>('select id, what, log from property_work where property_id = $1 order by id', [
    propertyId,
  ]);
}

export async function finishWork(tx: Tx, propertyId: string, work: readonly PropertyWork[]): Promise<void> {
  await tx.query('delete from property_work where property_id = $1 and id = any($2)', [
    propertyId,
    work.map(({ id }) => id),
  ]);
}

/**
 * Waits until the figures show every change that was made before.
 * @param ms at most so long
 * @returns whether they do
 */
export async function workDone(db: Database, propertyId: string, ms: number): Promise<boolean> {
  const look = async () => {
    const [row] = await db.query<{ last: number | null }>(
      'select max(id) as last from property_work where property_id = $1',
      [propertyId],
    );
    return row?.last ?? null;
  };
  const asked = await look();
  if (asked === null) return true;
  const left = async () => {
    const rows = await db.query('select from property_work where property_id = $1 and id <= $2 limit 1', [
      propertyId,
      asked,
    ]);
    return rows.length > 0;
  };
  return !(await lookUntil(db, `property:${propertyId}`, left, (some) => !some, ms));
}
