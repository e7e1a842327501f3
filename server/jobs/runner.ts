import { EventEmitter } from 'node:events';
import { Logger, run } from 'graphile-worker';
import type { Task, WorkerEvents } from 'graphile-worker';
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

  const ids = new Set<string>();
  const events: WorkerEvents = new EventEmitter();
  events.on('worker:create', ({ worker }) => ids.add(worker.workerId));
  await freeOrphans(db, ids);
  const runner = await run({
    pgPool: db.pool,
    concurrency,
    noHandleSignals: true,
    gracefulShutdownAbortTimeout: 6000,
    logger: new Logger(() => (level, message) => logger[level === 'warning' ? 'warn' : level](message)),
    events,
    taskList: Object.fromEntries(names.map((name) => [name, task(name, handlers[name], logger)])),
    crontab: SWEEP,
  });
  const beat = setInterval(() => {
    freeOrphans(db, ids).catch((error: unknown) => logger.warn({ err: error }, 'the worker could not report itself'));
  }, BEAT_MS);
  const ended = runner.promise.finally(() => clearInterval(beat));
  return {
    ended,
    stop: async () => {
      await runner.stop();
      await ended;
    },
  };
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

/** Reports these workers as alive and frees the jobs of those that have fallen silent. */
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
