import { EventEmitter } from 'node:events';
import { Logger, run } from 'graphile-worker';
import type { Task, Worker, WorkerEvents } from 'graphile-worker';
import type { Logger as Pino } from 'pino';
import type { Database } from '../database/connection.ts';
import type { Handlers, JobName, JobPayloads } from './names.ts';

/** A worker that has not been heard of for so long is dead, and its jobs are free again. */
const LEASE_SECONDS = 30;
const BEAT_MS = 10_000;
const SWEEP = '*/10 * * * * sweep';

export interface JobRunner {
  /** Takes no new job, waits for the running ones, then returns. */
  stop(): Promise<void>;
  /** Settles when the runner has ended for whatever reason. */
  ended: Promise<void>;
}

/**
 * Works off the queue until stopped. Jobs of a worker process that died are taken up again within the lease
 * and one beat: the queue's own rule would leave them for hours.
 *
 * @param handlers one handler for every job; a missing one is refused here as well as by the compiler
 */
export async function runJobs(
  db: Database,
  logger: Pino,
  handlers: Handlers,
  { concurrency }: { concurrency: number },
): Promise<JobRunner> {
  const names = Object.keys(handlers) as JobName[];
  for (const name of names)
    if (typeof handlers[name] !== 'function') throw new TypeError(`The job ${name} has no handler.`);

  const pools = new Set<string>();
  const workers = new Set<Worker>();
  const events: WorkerEvents = new EventEmitter();
  events.on('pool:create', ({ workerPool }) => pools.add(workerPool.id));
  events.on('worker:create', ({ worker }) => workers.add(worker));
  events.on('worker:release', ({ worker }) => workers.delete(worker));
  events.on('job:complete', () => lookAgain(workers));
  await freeOrphans(db, pools);
  const runner = await run({
    pgPool: db.pool,
    concurrency,
    noHandleSignals: true,
    gracefulShutdownAbortTimeout: 6000,
    // Results are written with retries, and all of them before the runner has stopped.
    preset: { worker: { completeJobBatchDelay: 0, failJobBatchDelay: 0 } },
    logger: new Logger(() => (level, message) => logger[level === 'warning' ? 'warn' : level](message)),
    events,
    taskList: Object.fromEntries(names.map((name) => [name, task(name, handlers[name], logger)])),
    crontab: SWEEP,
  });
  await freeOrphans(db, pools);
  const beat = setInterval(() => {
    freeOrphans(db, pools).catch((error: unknown) => logger.warn({ err: error }, 'the worker could not report itself'));
  }, BEAT_MS);
  const ended = runner.promise.finally(() => clearInterval(beat));
  let stopped: Promise<void> | undefined;
  return { ended, stop: () => (stopped ??= runner.stop().then(() => ended)) };
}

/**
 * The queue writes a job's result while it already looks for the next one, and then does not see the rest of
 * a queue that still counts as busy until it polls. So idle workers look again once the result is in.
 */
function lookAgain(workers: ReadonlySet<Worker>): void {
  for (const ms of [15, 150]) {
    setTimeout(() => {
      for (const worker of workers) worker.nudge();
    }, ms).unref();
  }
}

function task<Name extends JobName>(name: Name, handler: Handlers[Name], logger: Pino): Task {
  return async (payload, helpers) => {
    const started = performance.now();
    const outcome = await handler(payload as JobPayloads[Name], {
      signal: helpers.abortSignal ?? new AbortController().signal,
    });
    logger.info({ job: name, id: helpers.job.id, outcome, ms: Math.round(performance.now() - started) }, 'job');
  };
}

/** Reports these pools of workers as alive and frees the jobs of those that have fallen silent. */
async function freeOrphans(db: Database, alive: ReadonlySet<string>): Promise<void> {
  await db.query(
    `insert into workers (id, seen_at) select unnest($1::text[]), now()
     on conflict (id) do update set seen_at = excluded.seen_at`,
    [[...alive]],
  );
  await db.query(
    `select graphile_worker.force_unlock_workers(array_agg(distinct job.locked_by))
     from graphile_worker._private_jobs job
     where job.locked_at < now() - $1 * interval '1 second'
       and not exists (
         select from workers where workers.id = job.locked_by and seen_at > now() - $1 * interval '1 second')
     having count(*) > 0`,
    [LEASE_SECONDS],
  );
}
