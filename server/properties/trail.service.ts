import type { Trail } from '../../shared/api/grant.ts';
import type { Database, Tx } from '../database/connection.ts';
import { entriesOf, insertEntry } from './trail.repository.ts';

/** What people do to access, properties and logs; each leaves an entry in the property's trail. */
export type Act =
  | 'property added'
  | 'property changed'
  | 'system recorded'
  | 'tariff recorded'
  | 'grant given'
  | 'grant accepted'
  | 'grant declined'
  | 'grant withdrawn'
  | 'traces consented'
  | 'traces consent withdrawn'
  | 'log sent'
  | 'log read again'
  | 'log withdrawn';

/**
 * Leaves an entry in the transaction that does the act, so that neither is there without the other.
 *
 * @param about small facts: ids, dates, roles; nothing of what a log holds
 */
export function leaveTrail(
  tx: Tx,
  propertyId: string,
  personId: string | null,
  act: Act,
  about: Record<string, unknown> = {},
): Promise<void> {
  return insertEntry(tx, propertyId, personId, act, about);
}

/** The last thousand entries, newest first. */
export async function trailOf(db: Database, propertyId: string): Promise<Trail> {
  const entries = await entriesOf(db, propertyId, 1000);
  return { entries: entries.map((entry) => ({ ...entry, at: entry.at.toISOString() })) };
}
