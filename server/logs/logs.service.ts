import { isDeepStrictEqual } from 'node:util';
import type { Log, LogList, LogStatus } from '../../shared/api/log.ts';
import type { ColumnPlan, Inspection } from '../../shared/api/plan.ts';
import type { Person } from '../accounts/accounts.service.ts';
import type { Database, Scope, Tx } from '../database/connection.ts';
import type { Deps } from '../deps.ts';
import { badFields, problem } from '../http/problems.ts';
import { inspectBytes, inspectSummary, shapeKey } from '../ingest/inspect.ts';
import type { InspectContext } from '../ingest/inspect.ts';
import { Summariser } from '../ingest/summary.ts';
import { addJob } from '../jobs/queue.ts';
import { homeOf } from '../properties/properties.service.ts';
import { leaveTrail } from '../properties/trail.service.ts';
import { announce, lookUntil } from '../database/notices.ts';
import * as repository from './logs.repository.ts';
import type { StoredLog } from './logs.repository.ts';
import { keepOriginal, originalHead, OriginalWriter, storageRoom } from './originals.service.ts';
import type { Original } from './originals.service.ts';
import { askToRefresh, workDone } from '../jobs/work.ts';

export { changeLog, findLog, savedPlan, savePlan } from './logs.repository.ts';
export type { LogChange, StoredLog } from './logs.repository.ts';

/** How much of a file is looked at before it is acknowledged: enough to see that it is a table of readings. */
const HEAD = 16 * 1024;
/** A heading further down than this may lie beyond the head. */
const LATE_LINE = 50;
/** How long a withdrawal waits for the figures to follow. */
const WITHDRAW_MS = 30_000;

/** A log's id: its property's, and its number there. */
export const logId = ({ propertyId, n }: { propertyId: string; n: number }) => `${propertyId}-${n}`;

/** The number in a log's id; the property was decided on before. */
function numberOf(id: string): number {
  const n = /^[a-z0-9]{16}-([1-9]\d{0,8})$/.exec(id)?.[1];
  if (n === undefined) throw problem('not-found');
  return Number(n);
}

/** @throws Problem 404 if there is none of this id */
export async function logOf(scope: Scope, propertyId: string, id: string): Promise<StoredLog> {
  const log = await repository.findLog(scope, propertyId, numberOf(id));
  if (!log) throw problem('not-found');
  return log;
}

/** A log as the API shows it; rows of it only to those who may see traces. */
export function shown(log: StoredLog, traces: boolean): Log {
  const { propertyId, fileName, bytes, uploadedBy, status, progress, rows, plan, questions, problems, failure } = log;
  return {
    id: logId(log),
    propertyId,
    fileName,
    bytes,
    uploadedAt: log.uploadedAt.toISOString(),
    uploadedBy,
    status,
    progress,
    rows,
    from: log.fromAt?.toISOString() ?? null,
    to: log.toAt?.toISOString() ?? null,
    plan,
    questions,
    problems,
    sample: traces ? log.sample : null,
    failure,
  };
}

export async function listLogs(db: Database, propertyId: string): Promise<LogList> {
  const logs = await repository.logsOf(db, propertyId);
  return {
    logs: logs.map((log) => {
      const { sample: _sample, plan: _plan, ...rest } = shown(log, false);
      return rest;
    }),
  };
}

/** In these nothing changes by itself. */
const AT_REST: ReadonlySet<LogStatus> = new Set(['asking', 'refused', 'kept', 'failed', 'withdrawn']);

/**
 * A log, held back until something of it changes.
 * @param wait seconds at most; a log that is at rest comes at once
 */
export async function awaitLog(
  db: Database,
  propertyId: string,
  id: string,
  wait: number,
  signal: AbortSignal,
): Promise<StoredLog> {
  const n = numberOf(id);
  const first = await logOf(db, propertyId, id);
  return lookUntil(
    db,
    `log:${logId({ propertyId, n })}`,
    () => logOf(db, propertyId, id),
    (log) =>
      AT_REST.has(log.status) ||
      log.status !== first.status ||
      log.progress !== first.progress ||
      log.revision !== first.revision,
    wait * 1000,
    signal,
  );
}

/** What helps to understand a file of this property. */
export async function contextOf(scope: Scope, propertyId: string): Promise<InspectContext> {
  const home = await homeOf(scope, propertyId);
  if (!home) throw problem('not-found');
  const { timeZone, latitude, longitude, country } = home;
  return { timeZone, latitude, longitude, country };
}

/**
 * How a file would be read; keeps nothing.
 * @param given a plan to look at it with; without one a saved plan for its shape, else what is found
 */
export async function inspect(
  db: Database,
  propertyId: string,
  bytes: AsyncIterable<Buffer>,
  fileName: string,
  given: ColumnPlan | null,
) {
  const ctx = await contextOf(db, propertyId);
  const { summary, ...inspection } = await inspectBytes(bytes, fileName, ctx, given ?? undefined);
  return { ctx, summary, inspection };
}
type Inspected = Awaited<ReturnType<typeof inspect>>;

/** The answer to `inspect`, once all fields of the form are there. */
export async function inspectionAnswer(
  db: Database,
  propertyId: string,
  { ctx, summary, inspection }: Inspected,
  lookedAtWith: ColumnPlan | null,
  given: ColumnPlan | null,
): Promise<Inspection> {
  if (given && !lookedAtWith) return usable(inspectSummary(summary, ctx, given));
  if (given) return usable(inspection);
  const shape = shapeKey(summary);
  const saved = shape === null ? null : await repository.savedPlan(db, propertyId, shape);
  return usable(saved ? inspectSummary(summary, ctx, saved) : inspection);
}

/** Whether an inspection came to a plan, or to questions about one. */
export const found = ({ plan, questions }: Inspection) => plan !== null || questions.length > 0;

/** @throws Problem 422 with line and reason where the file is no table of readings, or not one by the plan given */
function usable(inspection: Inspection): Inspection {
  if (inspection.sample.columns.length > 0 || inspection.problems.length === 0) return inspection;
  throw badFields(
    inspection.problems.map(({ line, column, reason }) => ({
      path: column === null ? 'file' : `file: ${column}`,
      message: line === null ? reason : `line ${line}: ${reason}`,
    })),
  );
}

/** A file that has been written, and its beginning. */
export interface Arrived {
  writer: OriginalWriter;
  original: Original;
  head: Buffer;
}

/** Writes a file to the database while it streams in. What was written of one that fails is taken back. */
export async function writeOriginal(
  { db, config }: Deps,
  propertyId: string,
  bytes: AsyncIterable<Buffer>,
): Promise<Arrived> {
  const writer = new OriginalWriter(db, propertyId, await storageRoom(db, propertyId, config.quotaBytes));
  const head: Buffer[] = [];
  let size = 0;
  try {
    for await (const piece of bytes) {
      if (size < HEAD) head.push(piece.subarray(0, HEAD - size));
      size += piece.length;
      await writer.push(piece);
    }
    return { writer, original: await writer.end(), head: Buffer.concat(head) };
  } catch (error) {
    await writer.discard();
    throw error;
  }
}

export interface Upload {
  fileName: string;
  arrived: Arrived;
  plan: ColumnPlan | null;
  /** The caller's own name for this upload, so that a repeat is known as one. */
  key: string | null;
}

/**
 * Acknowledges a file: its bytes are durable, its log is there and queued to be read. The same bytes read the same
 * way are the log that is there; a withdrawn one comes back under its old number.
 * @throws Problem 422 if the file is no table of readings, or not one by the plan given
 */
export async function acceptLog(
  { db, config }: Deps,
  person: Person,
  propertyId: string,
  { fileName, arrived: { writer, original, head }, plan, key }: Upload,
): Promise<{ log: StoredLog; same: boolean }> {
  try {
    if (original.bytes === 0) throw badFields([{ path: 'file', message: 'the file is empty' }]);
    mustBeTable(head, original.bytes, fileName, await contextOf(db, propertyId), plan);
    return await db.transaction(async (tx) => {
      await repository.lockLogs(tx, propertyId);
      const before = key === null ? null : await repository.findKey(tx, propertyId, person.id, key);
      if (before) {
        if (!before.original.equals(original.hash))
          throw badFields([{ path: 'Idempotency-Key', message: 'this key was used for another file' }]);
        return { log: await present(tx, propertyId, before.log), same: true };
      }
      await keepOriginal(tx, propertyId, original, config.quotaBytes);
      const there = await repository.logsOfBytes(tx, propertyId, original.hash);
      const same = plan ? there.find((log) => log.plan && samePlan(log.plan, plan)) : there[0];
      let n: number;
      if (same) {
        n = same.n;
        if (COMES_BACK.has(same.status)) await readAgain(tx, person, propertyId, n, null);
      } else {
        n = await repository.insertLog(tx, {
          propertyId,
          fileName,
          original: original.hash,
          bytes: original.bytes,
          plan,
          personId: person.id,
        });
        await queue(tx, propertyId, n);
        await leaveTrail(tx, propertyId, person.id, 'log sent', { log: n, fileName });
      }
      if (key !== null) await repository.putKey(tx, propertyId, person.id, key, original.hash, n);
      return { log: await present(tx, propertyId, n), same: same !== undefined };
    });
  } catch (error) {
    await writer.discard();
    throw error;
  }
}

/** Sent again, these are read again. */
const COMES_BACK: ReadonlySet<LogStatus> = new Set(['withdrawn', 'failed', 'refused']);

const present = async (tx: Tx, propertyId: string, n: number) => logOf(tx, propertyId, logId({ propertyId, n }));

const samePlan = (a: ColumnPlan, b: ColumnPlan) =>
  isDeepStrictEqual(JSON.parse(JSON.stringify(a)), JSON.parse(JSON.stringify(b)));

/**
 * Looks at the head of a file, unless it is packed, or begins so late that its head does not show what it is: then
 * the worker finds out.
 */
function mustBeTable(
  head: Buffer,
  bytes: number,
  fileName: string,
  ctx: InspectContext,
  plan: ColumnPlan | null,
): void {
  const packed = (head[0] === 0x1f && head[1] === 0x8b) || (head.length > 3 && head.readUInt32BE(0) === 0x504b0304);
  const partial = bytes > head.length;
  if (packed || (partial && (plan?.headerLine ?? 0) > LATE_LINE)) return;
  const summariser = new Summariser(fileName);
  const lastLine = head.lastIndexOf(10);
  summariser.push(partial && lastLine > 0 ? head.subarray(0, lastLine + 1) : head);
  usable(inspectSummary(summariser.end(), ctx, plan ?? undefined));
}

async function queue(tx: Tx, propertyId: string, n: number): Promise<void> {
  await addJob(
    tx,
    'readLog',
    { propertyId, n },
    { queueName: `property:${propertyId}`, jobKey: `log:${logId({ propertyId, n })}` },
  );
  await announce(tx, `log:${logId({ propertyId, n })}`);
}

async function readAgain(tx: Tx, person: Person, propertyId: string, n: number, plan: ColumnPlan | null) {
  await repository.askToRead(tx, propertyId, n, plan);
  await queue(tx, propertyId, n);
  await leaveTrail(tx, propertyId, person.id, 'log read again', { log: n });
}

/**
 * Answers a log's questions, or corrects how it is read: its original is read again by this plan. It keeps its place
 * in the order of acceptance.
 */
export async function putPlan(
  { db }: Deps,
  person: Person,
  propertyId: string,
  id: string,
  plan: ColumnPlan,
): Promise<StoredLog> {
  const { original, bytes, fileName } = await logOf(db, propertyId, id);
  const head = await originalHead(db, propertyId, original, HEAD);
  mustBeTable(head, bytes, fileName, await contextOf(db, propertyId), plan);
  return db.transaction(async (tx) => {
    await repository.lockLogs(tx, propertyId);
    const { n, status } = await logOf(tx, propertyId, id);
    if (status === 'withdrawn')
      throw problem('conflict', 'This log is withdrawn. Send its file again to bring it back, then correct it.');
    await readAgain(tx, person, propertyId, n, plan);
    return present(tx, propertyId, n);
  });
}

/**
 * Withdraws a log, and waits until the figures are as if it had never come. Withdrawn already: nothing happens.
 */
export async function withdrawLog({ db }: Deps, person: Person, propertyId: string, id: string): Promise<void> {
  const n = numberOf(id);
  await db.transaction(async (tx) => {
    await repository.lockLogs(tx, propertyId);
    await logOf(tx, propertyId, id);
    if (!(await repository.markWithdrawn(tx, propertyId, n))) return;
    await askToRefresh(tx, propertyId, 'withdraw', n);
    await leaveTrail(tx, propertyId, person.id, 'log withdrawn', { log: n });
    await announce(tx, `log:${logId({ propertyId, n })}`);
  });
  await workDone(db, propertyId, WITHDRAW_MS);
}
