import type { ColumnPlan, RowProblem } from '../../shared/api/plan.ts';
import type { Database, Tx } from '../database/connection.ts';
import { deriveAll, deriveChanged } from '../days/derive.service.ts';
import type { Deps } from '../deps.ts';
import { asProblem } from '../http/problems.ts';
import type { JobContext, Outcome } from '../jobs/names.ts';
import { changeLog, contextOf, findLog, found, logId, savedPlan, savePlan } from '../logs/logs.service.ts';
import type { LogChange, StoredLog } from '../logs/logs.service.ts';
import { announce } from '../database/notices.ts';
import { originalBytes } from '../logs/originals.service.ts';
import { finishWork, workOf } from '../jobs/work.ts';
import { lockReadings, reachesOf, replaceLayers } from '../readings/readings.service.ts';
import type { LogReach } from '../readings/readings.service.ts';
import { atHand, BlockBuilder } from './encode.ts';
import { passStep } from './fault.ts';
import { inspectBytes, inspectSummary, shapeKey } from './inspect.ts';
import { LogRefused, readLog } from './read.ts';
import type { ReadResult } from './read.ts';
import { Summariser } from './summary.ts';

/** Progress is told at most so often. */
const PROGRESS_MS = 500;
/** So much of a file is looked at for its shape and first rows, when its plan is known. */
const HEAD = 64 * 1024;

/**
 * The job that reads a log: its original, by its plan, into blocks, and the days that depend on them, all in one
 * transaction. Whatever kills it on the way, the log is as it was before, or kept; the job runs again until it is.
 */
export async function readLogJob(
  deps: Deps,
  { propertyId, n }: { propertyId: string; n: number },
  { signal }: Pick<JobContext, 'signal'>,
): Promise<Outcome> {
  const { db, logger } = deps;
  const log = await findLog(db, propertyId, n);
  if (!log || (log.status !== 'waiting' && log.status !== 'reading')) return 'nothingToDo';
  try {
    const plan = log.plan ?? (await findPlan(db, log));
    if (!plan) return 'done';
    await tell(db, log, { status: 'reading', progress: 0 });
    return await readBy(deps, log, plan, signal);
  } catch (error) {
    if (error instanceof LogRefused) {
      await refuse(db, log, error);
      return 'done';
    }
    const { code } = asProblem(error);
    // These pass: the queue tries again. So does another process after this one was stopped.
    if (code === 'unavailable' || code === 'no-space' || signal.aborted) throw error;
    logger.error({ err: error, log: logId(log) }, 'a log could not be read');
    await tell(db, log, { status: 'failed', failure: 'Something went wrong on our side while this log was read.' });
    return 'done';
  }
}

/** Finds the plan of a log that came without one. Asks, or refuses, where there is none to take; then null. */
async function findPlan(db: Database, log: StoredLog): Promise<ColumnPlan | null> {
  const { propertyId, fileName, original } = log;
  const ctx = await contextOf(db, propertyId);
  const { summary, ...inspection } = await inspectBytes(originalBytes(db, propertyId, original), fileName, ctx);
  const shape = shapeKey(summary);
  const saved = shape === null ? null : await savedPlan(db, propertyId, shape);
  if (saved && found(inspectSummary(summary, ctx, saved))) {
    const { sample } = inspectSummary(summary, ctx, saved);
    await tell(db, log, { plan: saved, planBy: 'saved', shape, sample });
    return saved;
  }
  const { plan, questions, problems, sample } = inspection;
  if (!found(inspection)) {
    const [first] = problems;
    throw new LogRefused(first?.reason ?? 'No log was found in this file.', first?.line ?? null);
  }
  const asking = questions.length > 0 || plan === null;
  await tell(db, log, {
    plan,
    planBy: 'found',
    shape,
    questions,
    problems,
    sample,
    ...(asking && { status: 'asking' }),
  });
  return asking ? null : plan;
}

async function readBy(deps: Deps, log: StoredLog, plan: ColumnPlan, signal: AbortSignal): Promise<Outcome> {
  const { db, config } = deps;
  const { propertyId, n, original } = log;
  const builder = new BlockBuilder();
  const progress = new Progress(db, log);
  const head: Buffer[] = [];
  const result = await readLog(
    () => watched(originalBytes(db, propertyId, original), progress, head),
    plan,
    await contextOf(db, propertyId),
    {
      layer: (layer) => builder.add(layer),
      rejected: () => undefined,
      progress: () => signal.throwIfAborted(),
      restart: () => builder.clear(),
    },
  );
  passStep(config.faultAt, 'parse');
  mustHaveRows(result);
  const blocks = builder.blocks(result.intervals);
  const reach: LogReach = { n, reachDays: builder.reachDays(result.intervals), registers: builder.registers };
  const look = log.planBy === 'found' ? null : await lookAtHead(db, log, plan, Buffer.concat(head));
  await progress.end();

  const kept = await db.transaction(async (tx) => {
    await lockReadings(tx, propertyId);
    const before = (await reachesOf(tx, propertyId)).filter((other) => other.n === n);
    const change: LogChange = {
      status: 'kept',
      progress: 1,
      plan,
      rows: result.rows,
      fromAt: result.from === null ? null : new Date(result.from),
      toAt: result.to === null ? null : new Date(result.to),
      problems: result.problems,
      questions: [],
      failure: null,
      reachDays: reach.reachDays,
      registers: reach.registers,
      ...look,
    };
    // Withdrawn, or given another plan, while it was read: another job sees to that.
    if (!(await changeLog(tx, log, change))) return false;
    const changed = await replaceLayers(tx, propertyId, n, blocks);
    passStep(config.faultAt, 'store');
    await followReadings(tx, propertyId, changed, { atHand: atHand(blocks), extra: before });
    passStep(config.faultAt, 'reduce');
    passStep(config.faultAt, 'check');
    await announce(tx, `log:${logId(log)}`);
    await announce(tx, `property:${propertyId}`);
    passStep(config.faultAt, 'beforeCommit');
    return true;
  });
  passStep(config.faultAt, 'afterCommit');
  const { shape } = look ?? {};
  if (kept && log.planBy === 'person' && shape)
    // A convenience for the next file; should it be lost, a person is asked once more.
    await db.transaction((tx) => savePlan(tx, propertyId, shape, plan, n));
  return kept ? 'done' : 'nothingToDo';
}

/**
 * All that follows from changed readings, in the transaction that changed them: the days, then whatever is worked out
 * from days. What else is to be derived at each change, such as findings, joins here.
 */
async function followReadings(
  tx: Tx,
  propertyId: string,
  changed: readonly number[],
  options: Parameters<typeof deriveChanged>[3],
): Promise<void> {
  await deriveChanged(tx, propertyId, changed, options);
}

/**
 * The job that lets figures follow what is no reading: a withdrawn log, a changed record. All that is asked for at the
 * property is done in one transaction.
 */
export async function refreshJob({ db }: Deps, { propertyId }: { propertyId: string }): Promise<Outcome> {
  return db.transaction(async (tx) => {
    await lockReadings(tx, propertyId);
    const work = await workOf(tx, propertyId);
    if (work.length === 0) return 'nothingToDo';
    const reaches = await reachesOf(tx, propertyId);
    const changed: number[] = [];
    for (const { what, log } of work)
      if (what === 'withdraw' && log !== null && (await findLog(tx, propertyId, log))?.status === 'withdrawn')
        changed.push(...(await replaceLayers(tx, propertyId, log, [])));
    if (work.some(({ what }) => what === 'derive')) await deriveAll(tx, propertyId);
    else await followReadings(tx, propertyId, changed, { extra: reaches });
    await finishWork(tx, propertyId, work);
    await announce(tx, `property:${propertyId}`);
    return 'done';
  });
}

/** Changes a log outside a transaction, and tells who waits for it. */
async function tell(db: Database, log: StoredLog, change: LogChange): Promise<void> {
  if (await changeLog(db, log, change)) await announce(db, `log:${logId(log)}`);
}

/** A log that cannot be read says nothing: what it said before goes. */
async function refuse(db: Database, log: StoredLog, { reason, line, column }: LogRefused): Promise<void> {
  const { propertyId, n } = log;
  const problem: RowProblem = { line, column, reason, count: 1 };
  await db.transaction(async (tx) => {
    await lockReadings(tx, propertyId);
    const refused = await changeLog(tx, log, {
      status: 'refused',
      failure: line === null ? reason : `Line ${line}: ${reason}`,
      problems: [problem],
      questions: [],
    });
    if (!refused) return;
    const reaches = await reachesOf(tx, propertyId);
    await followReadings(tx, propertyId, await replaceLayers(tx, propertyId, n, []), { extra: reaches });
    await announce(tx, `log:${logId(log)}`);
    await announce(tx, `property:${propertyId}`);
  });
}

function mustHaveRows({ rows, problems }: ReadResult): void {
  if (rows.accepted + rows.unchanged > 0) return;
  const [worst] = [...problems].sort((a, b) => b.count - a.count);
  if (!worst) throw new LogRefused('The file has no row of readings.');
  throw new LogRefused(`No row could be taken. ${worst.reason}`, worst.line, worst.column);
}

/** The shape and the first rows of a file whose plan is known. */
async function lookAtHead(db: Database, log: StoredLog, plan: ColumnPlan, head: Buffer) {
  if (head[0] === 0x1f || head.subarray(0, 2).toString('latin1') === 'PK') return { shape: log.shape };
  const summariser = new Summariser(log.fileName);
  const last = head.lastIndexOf(10);
  summariser.push(log.bytes > head.length && last > 0 ? head.subarray(0, last + 1) : head);
  const summary = summariser.end();
  const { sample } = inspectSummary(summary, await contextOf(db, log.propertyId), plan);
  return { shape: log.shape ?? shapeKey(summary), sample };
}

/** Passes bytes on, counts them, and keeps the first. */
async function* watched(bytes: AsyncGenerator<Buffer>, progress: Progress, head: Buffer[]): AsyncGenerator<Buffer> {
  let size = 0;
  head.length = 0;
  for await (const piece of bytes) {
    if (size < HEAD) head.push(piece.subarray(0, HEAD - size));
    size += piece.length;
    progress.at(size);
    yield piece;
  }
}

/** Tells how far a log is read, outside any transaction, one telling at a time and not too often. */
class Progress {
  private told = performance.now();
  private telling: Promise<void> = Promise.resolve();

  constructor(
    private readonly db: Database,
    private readonly log: StoredLog,
  ) {}

  at(bytes: number): void {
    const now = performance.now();
    if (now - this.told < PROGRESS_MS) return;
    this.told = now;
    const progress = Math.min(0.99, bytes / Math.max(1, this.log.bytes));
    // Only news: if it cannot be told, the reading goes on.
    this.telling = this.telling.then(() => tell(this.db, this.log, { progress })).catch(() => undefined);
  }

  /** Resolves when nothing is being told any more. */
  end(): Promise<void> {
    return this.telling;
  }
}
