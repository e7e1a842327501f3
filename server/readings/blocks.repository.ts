import type pg from 'pg';
import type { Scope, Tx } from '../database/connection.ts';
import { copyRows, CopyWriter, literal } from '../database/copy.ts';

/** What a log says on one UTC day: the hash of its block. */
export interface BlockRef {
  utcDay: number;
  log: number;
  hash: Buffer;
}

export interface StoredBlock {
  utcDay: number;
  hash: Buffer;
  data: Uint8Array;
}

/** Makes whatever changes a property's readings and figures run one at a time, until the transaction ends. */
export async function lockReadings(tx: Tx, propertyId: string): Promise<void> {
  await tx.query(`select pg_advisory_xact_lock(hashtextextended($1, 2))`, [propertyId]);
}

/** Which blocks are in use on the days from `from` to `to`, both included, by day and log. */
export function refsBetween(scope: Pick<Scope, 'query'>, propertyId: string, from: number, to: number) {
  return scope.query<BlockRef>(
    `select utc_day as "utcDay", log, hash from log_blocks
     where property_id = $1 and utc_day between $2 and $3 order by utc_day, log`,
    [propertyId, from, to],
  );
}

export function refsOfLog(tx: Tx, propertyId: string, log: number): Promise<BlockRef[]> {
  return tx.query<BlockRef>(
    `select utc_day as "utcDay", log, hash from log_blocks where property_id = $1 and log = $2 order by utc_day`,
    [propertyId, log],
  );
}

/** First and last day on which any log of the property says something. */
export async function daySpan(
  tx: Pick<Scope, 'query'>,
  propertyId: string,
): Promise<{ first: number; last: number } | null> {
  const [row] = await tx.query<{ first: number | null; last: number | null }>(
    'select min(utc_day) as first, max(utc_day) as last from log_blocks where property_id = $1',
    [propertyId],
  );
  return row && row.first !== null && row.last !== null ? { first: row.first, last: row.last } : null;
}

/** The days and hashes (in hex) of the blocks that are stored between two days, both included. */
export async function storedHashes(tx: Tx, propertyId: string, from: number, to: number): Promise<Set<string>> {
  const rows = await tx.query<{ day: number; hash: Buffer }>(
    'select utc_day as day, hash from day_blocks where property_id = $1 and utc_day between $2 and $3',
    [propertyId, from, to],
  );
  return new Set(rows.map(({ day, hash }) => blockKey(day, hash)));
}

export const blockKey = (utcDay: number, hash: Buffer) => `${utcDay} ${hash.toString('latin1')}`;

/** The blocks stored between two days, both included. */
export async function* blocksBetween(
  client: pg.ClientBase,
  propertyId: string,
  from: number,
  to: number,
): AsyncGenerator<StoredBlock> {
  const sql = `select utc_day, hash, data from day_blocks where property_id = ${literal(propertyId)}
    and utc_day between ${literal(from)} and ${literal(to)}`;
  for await (const [day, hash, data] of copyRows(client, sql))
    if (day && hash && data) yield { utcDay: day.readInt32BE(0), hash, data };
}

export async function copyBlocks(tx: Tx, propertyId: string, blocks: readonly StoredBlock[]): Promise<void> {
  const copy = new CopyWriter(tx, 'day_blocks', [
    ['property_id', 'text'],
    ['utc_day', 'int4'],
    ['hash', 'bytea'],
    ['data', 'bytea'],
  ]);
  for (const { utcDay, hash, data } of blocks) await copy.row([propertyId, utcDay, hash, data]);
  await copy.end();
}

export async function copyRefs(tx: Tx, propertyId: string, refs: readonly BlockRef[]): Promise<void> {
  const copy = new CopyWriter(tx, 'log_blocks', [
    ['property_id', 'text'],
    ['utc_day', 'int4'],
    ['log', 'int4'],
    ['hash', 'bytea'],
  ]);
  for (const { utcDay, log, hash } of refs) await copy.row([propertyId, utcDay, log, hash]);
  await copy.end();
}

export async function deleteRefs(tx: Tx, propertyId: string, log: number, days: readonly number[]): Promise<void> {
  await tx.query('delete from log_blocks where property_id = $1 and utc_day = any($3) and log = $2', [
    propertyId,
    log,
    days,
  ]);
}

/** Drops the blocks of these days that no log refers to any more. */
export async function deleteUnused(tx: Tx, propertyId: string, days: readonly number[]): Promise<void> {
  await tx.query(
    `delete from day_blocks b where b.property_id = $1 and b.utc_day = any($2) and not exists (
       select from log_blocks r where r.property_id = $1 and r.utc_day = b.utc_day and r.hash = b.hash)`,
    [propertyId, days],
  );
}

/** How far a log's readings can weigh on figures, and whether it holds registers. */
export interface LogReach {
  n: number;
  reachDays: number;
  registers: boolean;
}

export function reachesOf(scope: Pick<Scope, 'query'>, propertyId: string): Promise<LogReach[]> {
  return scope.query<LogReach>('select n, reach_days as "reachDays", registers from logs where property_id = $1', [
    propertyId,
  ]);
}
