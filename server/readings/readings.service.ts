import type pg from 'pg';
import type { Channel } from '../../shared/units/channels.ts';
import type { Layer, LogLayer } from '../../shared/energy/layer.ts';
import type { Database, Scope, Tx } from '../database/connection.ts';
import { decodeLayer } from './block.ts';
import * as repository from './blocks.repository.ts';
import type { BlockRef, LogReach, StoredBlock } from './blocks.repository.ts';

export { blockKey, daySpan, lockReadings, reachesOf } from './blocks.repository.ts';
export type { LogReach, StoredBlock } from './blocks.repository.ts';

/** A register step counts for the days between its readings up to this long; see the rule of registers. */
export const REGISTER_REACH_DAYS = 33;
/** Readings of most logs weigh on the days next to theirs only. */
export const USUAL_REACH_DAYS = 2;

/**
 * Makes a log say exactly these blocks; none takes it out. Blocks that are stored already are not written again, and
 * those that no log needs any more go.
 *
 * @param blocks one per UTC day
 * @returns the UTC days on which what the log says changed
 */
export async function replaceLayers(
  tx: Tx,
  propertyId: string,
  log: number,
  blocks: readonly StoredBlock[],
): Promise<number[]> {
  const before = new Map((await repository.refsOfLog(tx, propertyId, log)).map((ref) => [ref.utcDay, ref.hash]));
  const changed = blocks.filter(({ utcDay, hash }) => !before.get(utcDay)?.equals(hash));
  const after = new Set(blocks.map(({ utcDay }) => utcDay));
  const dropped = [...before.keys()].filter((day) => !after.has(day));
  const days = [...changed.map(({ utcDay }) => utcDay), ...dropped];
  if (days.length === 0) return [];
  const old = days.filter((day) => before.has(day));
  if (old.length) await repository.deleteRefs(tx, propertyId, log, old);
  if (changed.length) {
    const stored = await repository.storedHashes(tx, propertyId, ...extent(changed.map(({ utcDay }) => utcDay)));
    const fresh = changed.filter(({ utcDay, hash }) => !stored.has(repository.blockKey(utcDay, hash)));
    if (fresh.length) await repository.copyBlocks(tx, propertyId, fresh);
    await repository.copyRefs(
      tx,
      propertyId,
      changed.map(({ utcDay, hash }) => ({ utcDay, log, hash })),
    );
  }
  if (old.length) await repository.deleteUnused(tx, propertyId, old);
  return days;
}

function extent(days: readonly number[]): [number, number] {
  let first = Infinity;
  let last = -Infinity;
  for (const day of days) {
    if (day < first) first = day;
    if (day > last) last = day;
  }
  return [first, last];
}

/** Blocks that are at hand, by `blockKey`, so that they need not be read back. */
export type BlocksAtHand = ReadonlyMap<string, Uint8Array>;

/** Where layers are read: inside a transaction, or on a connection of its own. */
export interface ReadingsScope {
  query: Scope['query'];
  client: pg.ClientBase;
}

/** Lends a connection for reading layers outside a transaction. */
export async function withReadings<T>(db: Database, work: (scope: ReadingsScope) => Promise<T>): Promise<T> {
  const client = await db.pool.connect();
  let broken = false;
  try {
    return await work({ client, query: (sql, values) => db.query(sql, values) });
  } catch (error) {
    broken = true;
    throw error;
  } finally {
    client.release(broken);
  }
}

/**
 * The layers that weigh on a span of UTC days: those of the days themselves, and around them as far as each log
 * reaches. What comes is a function of what is stored alone, so that a day derived twice comes out the same.
 *
 * @param span first and last UTC day, both included
 * @param only leaves all other channels out
 */
export async function layersAround(
  scope: ReadingsScope,
  propertyId: string,
  span: { from: number; to: number },
  reaches: readonly LogReach[],
  { only, atHand }: { only?: ReadonlySet<Channel>; atHand?: BlocksAtHand } = {},
): Promise<LogLayer[]> {
  const widest = reaches.reduce(
    (most, { reachDays, registers }) => Math.max(most, registers ? REGISTER_REACH_DAYS : reachDays),
    USUAL_REACH_DAYS,
  );
  const refs = await repository.refsBetween(scope, propertyId, span.from - widest, span.to + widest);
  return decoded(scope, propertyId, weighing(refs, span, reaches), { only, atHand });
}

/** The references that weigh on a span. */
function weighing(refs: readonly BlockRef[], span: { from: number; to: number }, reaches: readonly LogReach[]) {
  const reach = new Map(reaches.map((log) => [log.n, log]));
  const near = (ref: BlockRef) => {
    const days = reach.get(ref.log)?.reachDays ?? USUAL_REACH_DAYS;
    return ref.utcDay >= span.from - days && ref.utcDay <= span.to + days;
  };
  const chosen = new Set(refs.filter(near));
  // A register's last reading before the span and its first one after it bound steps that cross the span's ends.
  for (const { n, registers } of reaches) {
    if (!registers) continue;
    const own = refs.filter(({ log }) => log === n);
    const before = own.findLast(({ utcDay }) => utcDay < span.from);
    const after = own.find(({ utcDay }) => utcDay > span.to);
    if (before) chosen.add(before);
    if (after) chosen.add(after);
  }
  return refs.filter((ref) => chosen.has(ref));
}

async function decoded(
  { client }: ReadingsScope,
  propertyId: string,
  refs: readonly BlockRef[],
  { only, atHand }: { only?: ReadonlySet<Channel>; atHand?: BlocksAtHand },
): Promise<LogLayer[]> {
  if (refs.length === 0) return [];
  const layers = new Map<string, Layer | null>();
  let missing = false;
  for (const { utcDay, hash } of refs) {
    const key = repository.blockKey(utcDay, hash);
    const block = atHand?.get(key);
    if (!block) missing = true;
    layers.set(key, block ? decodeLayer(block, utcDay, only) : null);
  }
  if (missing)
    for await (const { utcDay, hash, data } of repository.blocksBetween(
      client,
      propertyId,
      refs[0].utcDay,
      refs[refs.length - 1].utcDay,
    )) {
      const key = repository.blockKey(utcDay, hash);
      if (layers.get(key) === null) layers.set(key, decodeLayer(data, utcDay, only));
    }
  return refs.flatMap(({ utcDay, hash, log }) => {
    const layer = layers.get(repository.blockKey(utcDay, hash));
    return layer && layer.columns.length > 0 ? [{ ...layer, log }] : [];
  });
}
