import { setTimeout as wait } from 'node:timers/promises';
import { afterEach, describe, expect, it } from 'vitest';
import { openDatabase } from '../../server/database/connection.ts';
import type { Handlers } from '../../server/jobs/names.ts';
import { addJob } from '../../server/jobs/queue.ts';
import { runJobs } from '../../server/jobs/runner.ts';
import type { JobRunner } from '../../server/jobs/runner.ts';
import { sweep } from '../../server/jobs/sweep.ts';
import { makeLogger } from '../../server/http/logs.ts';
import { useDatabase } from '../support/database.ts';

const t = useDatabase();
const logger = makeLogger('silent');
const runners: JobRunner[] = [];

/** Every job does the same here; what is looked at is when and how often. */
const handlersOf = (work: Handlers['sweep']) =>
  new Proxy({} as Handlers, {
    ownKeys: () => ['sweep'],
    getOwnPropertyDescriptor: () => ({ enumerable: true, configurable: true }),
    get: () => work,
  });
const start = async (work: Handlers['sweep'], db = t.db) => {
  const runner = await runJobs(db, logger, handlersOf(work), { concurrency: 2 });
  runners.push(runner);
  return runner;
};
const waiting = async () => (await t.db.query('select from graphile_worker._private_jobs')).length;
const until = async (done: () => boolean | Promise<boolean>) => {
  for (let i = 0; i < 200 && !(await done()); i++) await wait(25);
  expect(await done()).toBe(true);
};

afterEach(async () => {
  await Promise.all(runners.splice(0).map((runner) => runner.stop()));
  await t.db.query('delete from graphile_worker._private_jobs');
});

describe('a job', () => {
  it('when its transaction commits, then it runs once; when it rolls back, then never', async () => {
    let runs = 0;
    await start(async () => {
      runs++;
      return 'done';
    });
    await t.db
      .transaction(async (tx) => {
        await addJob(tx, 'sweep', {});
        throw new Error('rolled back');
      })
      .catch(() => undefined);
    expect(await waiting()).toBe(0);
    await t.db.transaction((tx) => addJob(tx, 'sweep', {}));
    await until(async () => runs === 1 && (await waiting()) === 0);
  });

  it('when two runners share the queue, then each job still runs once', async () => {
    const other = openDatabase(t.url);
    let runs = 0;
    const work = async () => {
      runs++;
      await wait(5);
      return 'done' as const;
    };
    await start(work);
    await start(work, other);
    await t.db.transaction(async (tx) => {
      for (let i = 0; i < 40; i++) await addJob(tx, 'sweep', {});
    });
    await until(async () => (await waiting()) === 0);
    expect(runs).toBe(40);
    await Promise.all(runners.splice(0).map((runner) => runner.stop()));
    await other.close();
  });

  it('when jobs name one queue, then they run one at a time', async () => {
    let running = 0;
    let most = 0;
    let runs = 0;
    await start(async () => {
      most = Math.max(most, ++running);
      await wait(20);
      running--;
      runs++;
      return 'done';
    });
    await t.db.transaction(async (tx) => {
      for (let i = 0; i < 6; i++) await addJob(tx, 'sweep', {}, { queueName: 'property:a' });
    });
    await until(() => runs === 6);
    expect(most).toBe(1);
  });

  it('when a job of the same key waits, then one run answers for both', async () => {
    await t.db.transaction(async (tx) => {
      await addJob(tx, 'sweep', {}, { jobKey: 'same' });
      await addJob(tx, 'sweep', {}, { jobKey: 'same' });
    });
    expect(await waiting()).toBe(1);
  });

  it('when the runner stops, then it ends the running job first', async () => {
    let ended = false;
    let begun = false;
    const runner = await start(async () => {
      begun = true;
      await wait(300);
      ended = true;
      return 'done';
    });
    await t.db.transaction((tx) => addJob(tx, 'sweep', {}));
    await until(() => begun);
    await runner.stop();
    expect(ended).toBe(true);
    expect(await waiting()).toBe(0);
  });

  it('when it runs, then it is locked by someone who is reported as alive', async () => {
    let locked: unknown[] = [];
    await start(async () => {
      locked = await t.db.query(
        `select workers.seen_at > now() - interval '15 s' as alive from graphile_worker._private_jobs job
         left join workers on workers.id = job.locked_by`,
      );
      return 'done';
    });
    await t.db.transaction((tx) => addJob(tx, 'sweep', {}));
    await until(() => locked.length > 0);
    expect(locked).toEqual([{ alive: true }]);
  });

  it('when its worker died and the lease is over, then the next start takes it up again; a living one keeps it', async () => {
    await t.db.transaction(async (tx) => {
      await addJob(tx, 'sweep', {}, { jobKey: 'orphan', queueName: 'orphans' });
      await addJob(tx, 'sweep', {}, { jobKey: 'kept' });
    });
    await t.db.query(
      `update graphile_worker._private_jobs set locked_at = now() - interval '31 seconds',
         locked_by = case when key = 'orphan' then 'worker-dead' else 'worker-alive' end`,
    );
    await t.db.query(
      `update graphile_worker._private_job_queues set locked_at = now() - interval '31 seconds', locked_by = 'worker-dead'`,
    );
    await t.db.query(
      `insert into workers values ('worker-dead', now() - interval '31 seconds'), ('worker-alive', now())`,
    );
    let runs = 0;
    await start(async () => {
      runs++;
      return 'done';
    });
    await until(async () => runs === 1 && (await waiting()) === 1);
    const left = await t.db.query<{ key: string; locked_by: string }>(
      'select key, locked_by from graphile_worker._private_jobs',
    );
    expect(left).toEqual([{ key: 'kept', locked_by: 'worker-alive' }]);
  });

  it('when it throws, then it waits to be tried again', async () => {
    let runs = 0;
    await start(async () => {
      runs++;
      throw new Error('invented failure');
    });
    await t.db.transaction((tx) => addJob(tx, 'sweep', {}));
    await until(() => runs === 1);
    await until(async () => {
      const [job] = await t.db.query<{ attempts: number; last_error: string | null }>(
        'select attempts, last_error from graphile_worker._private_jobs',
      );
      return job?.attempts === 1 && (job.last_error ?? '').includes('invented failure');
    });
  });
});

describe('the sweep', () => {
  it('when rows have run out, then these go and the others stay', async () => {
    await t.db.query(
      `insert into sessions values ('old', '{}', now() - interval '1 day'), ('new', '{}', now() + interval '1 day')`,
    );
    await t.db.query(
      `insert into counters values ('old', 1, now() - interval '1 s'), ('new', 1, now() + interval '1 day')`,
    );
    expect(await sweep(t.db)).toBe('done');
    expect(await t.db.query('select sid from sessions')).toEqual([{ sid: 'new' }]);
    expect(await t.db.query('select key from counters')).toEqual([{ key: 'new' }]);
    expect(await sweep(t.db)).toBe('nothingToDo');
  });
});
