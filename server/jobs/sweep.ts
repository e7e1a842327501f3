import type { Database } from '../database/connection.ts';
import { LEFTOVERS } from '../logs/originals.service.ts';
import type { Outcome } from './names.ts';

const RUN_OUT = [
  'delete from sessions where expire < now()',
  'delete from counters where ends_at < now()',
  `delete from known_devices where used_at < now() - interval '1 year'`,
  `delete from workers where seen_at < now() - interval '1 day'`,
  ...LEFTOVERS,
];

/** Clears away what has run out. */
export async function sweep(db: Database): Promise<Outcome> {
  let rows = 0;
  for (const sql of RUN_OUT) rows += (await db.query(`${sql} returning 1`)).length;
  return rows ? 'done' : 'nothingToDo';
}
