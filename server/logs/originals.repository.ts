import type { Database, Scope, Tx } from '../database/connection.ts';
import { copyRows, literal } from '../database/copy.ts';

/** An uploaded file as it is kept: the hashes of its chunks in order. */
export interface Original {
  hash: Buffer;
  bytes: number;
  chunks: Buffer[];
}

/**
 * Whether a chunk is there for an upload to use; one that has waited so long for its original that a sweep may take it
 * does not count.
 */
export async function hasChunk(scope: Scope, propertyId: string, hash: Buffer): Promise<boolean> {
  const rows = await scope.query(
    `select from original_chunks where property_id = $1 and hash = $2
       and (not arriving or arrived_at > now() - interval '15 minutes')`,
    [propertyId, hash],
  );
  return rows.length > 0;
}

/**
 * Writes a chunk in a transaction of its own that does not wait for the disk: the commit that makes an original of
 * the chunks does, and makes all before it durable.
 */
export async function putChunk(db: Database, propertyId: string, hash: Buffer, data: Buffer): Promise<void> {
  await db.query(
    `with quick as (select set_config('synchronous_commit', 'off', true))
     insert into original_chunks (property_id, hash, data) select $1, $2, $3 from quick
     on conflict (property_id, hash) do update set arrived_at = now()`,
    [propertyId, hash, data],
  );
}

export async function dropArriving(db: Database, propertyId: string, hashes: readonly Buffer[]): Promise<void> {
  await db.query('delete from original_chunks where property_id = $1 and hash = any($2) and arriving', [
    propertyId,
    hashes,
  ]);
}

/** Makes arrived chunks an original's; false if one of them has gone. */
export async function settleChunks(tx: Tx, propertyId: string, chunks: readonly Buffer[]): Promise<boolean> {
  await tx.query('update original_chunks set arriving = false where property_id = $1 and hash = any($2) and arriving', [
    propertyId,
    chunks,
  ]);
  const [row] = await tx.query<{ there: number }>(
    'select count(*)::int as there from original_chunks where property_id = $1 and hash = any($2)',
    [propertyId, chunks],
  );
  return row?.there === new Set(chunks.map((hash) => hash.toString('hex'))).size;
}

/** Keeps an original; false if the property has it already. */
export async function insertOriginal(tx: Tx, propertyId: string, original: Original): Promise<boolean> {
  const rows = await tx.query(
    `insert into originals (property_id, hash, bytes, chunks) values ($1, $2, $3, $4)
     on conflict do nothing returning 1`,
    [propertyId, original.hash, original.bytes, original.chunks],
  );
  return rows.length > 0;
}

export async function findOriginal(scope: Scope, propertyId: string, hash: Buffer): Promise<Original | null> {
  const [row] = await scope.query<Original>(
    'select hash, bytes, chunks from originals where property_id = $1 and hash = $2',
    [propertyId, hash],
  );
  return row ?? null;
}

/** One chunk's bytes, on a connection that is given back at once. */
export async function readChunk(db: Database, propertyId: string, hash: Buffer): Promise<Buffer> {
  const client = await db.pool.connect();
  let failure: Error | undefined;
  try {
    const sql = `select data from original_chunks where property_id = ${literal(propertyId)} and hash = ${literal(hash)}`;
    let found: Buffer | null = null;
    for await (const [data] of copyRows(client, sql)) found = data;
    if (!found) throw new Error('A chunk of an original is gone.');
    return found;
  } catch (error) {
    failure = error instanceof Error ? error : new Error(String(error));
    throw error;
  } finally {
    client.release(failure);
  }
}

/** Bytes of originals of all the properties that the property's keeping team keeps. */
export async function storageUsed(scope: Scope, propertyId: string): Promise<number> {
  const [row] = await scope.query<{ bytes: number }>(
    `select s.bytes from team_storage s join properties p on p.team_id = s.team_id where p.id = $1`,
    [propertyId],
  );
  return row?.bytes ?? 0;
}

/** Adds to what the keeping team's originals take, and returns the sum. */
export async function addStorage(tx: Tx, propertyId: string, bytes: number): Promise<number> {
  const [row] = await tx.query<{ bytes: number }>(
    `insert into team_storage as s (team_id, bytes) select team_id, $2 from properties where id = $1
     on conflict (team_id) do update set bytes = s.bytes + excluded.bytes returning bytes`,
    [propertyId, bytes],
  );
  return row?.bytes ?? 0;
}

/** What uploads that were broken off have left behind. */
export const LEFTOVERS = [
  `delete from original_chunks where arriving and arrived_at < now() - interval '30 minutes'`,
  `delete from upload_keys where at < now() - interval '1 day'`,
];
