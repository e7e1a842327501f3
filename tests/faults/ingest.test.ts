import { spawn } from 'node:child_process';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import type { Log } from '../../shared/api/log.ts';
import { STEPS } from '../../server/ingest/fault.ts';
import type { Step } from '../../server/ingest/fault.ts';
import { jobHandlers } from '../../server/jobs/handlers.ts';
import { runJobs } from '../../server/jobs/runner.ts';
import { useApp } from '../support/app.ts';
import type { TestPerson } from '../support/app.ts';
import { HALF_HOURS, halfHours } from '../support/csv.ts';
import { daysOf, send, settled } from '../support/worker.ts';

const t = useApp();
const ROOT = path.resolve(import.meta.dirname, '../..');
const FIRST = halfHours('2023-06-01T00:00:00Z', 10 * 48);
const SECOND = halfHours('2023-06-06T12:00:00Z', 30 * 48, (i) => [i % 300, i % 700]);
const SPAN = ['2023-05-30', '2023-07-10'] as const;

/** Runs a worker process of the product that kills itself at a step; resolves with the signal that ended it. */
function dyingWorker(step: Step): Promise<NodeJS.Signals | number | null> {
  const child = spawn(process.execPath, ['--import', 'tsx', 'server/worker.ts'], {
    cwd: ROOT,
    env: {
      PATH: process.env.PATH,
      NODE_ENV: 'test',
      DATABASE_URL: t.deps.config.databaseUrl,
      FAULT_AT: step,
      LOG_LEVEL: 'silent',
    },
    stdio: 'ignore',
  });
  return new Promise((resolve) => child.once('exit', (code, signal) => resolve(signal ?? code)));
}

async function withWorker<T>(work: () => Promise<T>): Promise<T> {
  const runner = await runJobs(t.db, t.deps.logger, jobHandlers(t.deps), { concurrency: 1 });
  try {
    return await work();
  } finally {
    await runner.stop();
  }
}

/** As if so much time had passed since the dead worker was last heard of. */
async function passLease(): Promise<void> {
  await t.db.query(`update workers set seen_at = seen_at - interval '1 hour'`);
  await t.db.query(
    `update graphile_worker._private_jobs set locked_at = locked_at - interval '1 hour' where locked_at is not null`,
  );
  await t.db.query(
    `update graphile_worker._private_job_queues set locked_at = locked_at - interval '1 hour' where locked_at is not null`,
  );
}

const written = async (id: string, log: number) => {
  const [row] = await t.db.query(
    `select (select count(*)::int from log_blocks where property_id = $1 and log = $2) as refs,
       (select count(*)::int from day_blocks b where property_id = $1 and not exists (
          select from log_blocks r where r.property_id = $1 and r.utc_day = b.utc_day and r.hash = b.hash)) as unused`,
    [id, log],
  );
  return row;
};

async function homeWithFirst(owner: TestPerson) {
  const { id } = await t.property(owner, { timeZone: 'UTC' });
  await send(owner.agent, id, FIRST, HALF_HOURS).expect(202);
  await withWorker(() => settled(owner.agent, `${id}-1`));
  return id;
}

describe('kill -9 of the worker', () => {
  it.each(STEPS)(
    'when it dies at %s, then the log is whole or not there, and is taken up again',
    async (step) => {
      const owner = await t.person();
      const { agent } = owner;
      const undisturbed = await homeWithFirst(owner);
      const before = await daysOf(agent, undisturbed, ...SPAN);
      await send(agent, undisturbed, SECOND, HALF_HOURS).expect(202);
      await withWorker(() => settled(agent, `${undisturbed}-2`));
      const after = await daysOf(agent, undisturbed, ...SPAN);
      expect(after).not.toEqual(before);

      const id = await homeWithFirst(owner);
      await send(agent, id, SECOND, HALF_HOURS).expect(202);
      expect(await dyingWorker(step)).toBe('SIGKILL');
      const committed = step === 'afterCommit';
      expect(await daysOf(agent, id, ...SPAN)).toEqual(committed ? after : before);
      expect(await written(id, 2)).toEqual({ refs: committed ? 31 : 0, unused: 0 });
      const { body } = await agent.get(`/api/logs/${id}-2`).expect(200);
      expect((body as { log: Log }).log.status).toBe(committed ? 'kept' : 'reading');

      await passLease();
      const log = await withWorker(() => settled(agent, `${id}-2`));
      expect(log).toMatchObject({ status: 'kept', rows: { read: 1440, accepted: 1440, rejected: 0, unchanged: 0 } });
      expect(await daysOf(agent, id, ...SPAN)).toEqual(after);
      expect(await written(id, 2)).toEqual({ refs: 31, unused: 0 });
    },
    120_000,
  );

  it('when no time is made to pass, then another worker takes the log up within a minute', async () => {
    const owner = await t.person();
    const id = await homeWithFirst(owner);
    await send(owner.agent, id, SECOND, HALF_HOURS).expect(202);
    expect(await dyingWorker('store')).toBe('SIGKILL');
    const died = Date.now();
    await withWorker(() => settled(owner.agent, `${id}-2`));
    // The contract's own limit.
    expect(Date.now() - died).toBeLessThan(60_000);
  }, 120_000);
});

describe('a correction or a withdrawal while a log is read', () => {
  it('when a log is withdrawn before it was read, then it says nothing, and reading it does not bring it back', async () => {
    const owner = await t.person();
    const id = await homeWithFirst(owner);
    const before = await daysOf(owner.agent, id, ...SPAN);
    await send(owner.agent, id, SECOND, HALF_HOURS).expect(202);
    const withdrawn = owner.agent.delete(`/api/logs/${id}-2`).then((answer) => answer.status);
    await expect.poll(async () => (await owner.agent.get(`/api/logs/${id}-2`)).body.log.status).toBe('withdrawn');
    expect(await withWorker(() => withdrawn)).toBe(204);
    expect(await daysOf(owner.agent, id, ...SPAN)).toEqual(before);
    expect(await written(id, 2)).toEqual({ refs: 0, unused: 0 });
  }, 60_000);
});
