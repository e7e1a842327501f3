import { afterAll, beforeAll, expect } from 'vitest';
import type { Agent } from 'supertest';
import type { DaysAnswer } from '../../shared/api/day.ts';
import type { Log } from '../../shared/api/log.ts';
import type { ColumnPlan } from '../../shared/api/plan.ts';
import { jobHandlers } from '../../server/jobs/handlers.ts';
import { runJobs } from '../../server/jobs/runner.ts';
import type { JobRunner } from '../../server/jobs/runner.ts';
import type { TestApp } from './app.ts';

/** Works off the queue of a test's database from its first test to its last, in the test's own process. */
export function useWorker(t: TestApp): void {
  let runner: JobRunner | null = null;
  beforeAll(async () => {
    runner = await runJobs(t.db, t.deps.logger, jobHandlers(t.deps), { concurrency: 1 });
  });
  afterAll(async () => {
    await runner?.stop();
  });
}

/** Sends a file; the answer as it came. */
export function send(
  agent: Agent,
  propertyId: string,
  csv: string | Buffer,
  plan?: ColumnPlan | null,
  name = 'log.csv',
) {
  const call = agent.post(`/api/properties/${propertyId}/logs`);
  if (plan) call.field('plan', JSON.stringify(plan));
  return call.attach('file', Buffer.from(csv), name);
}

const AT_WORK = new Set(['waiting', 'reading']);

/** Waits until a log is at rest. */
export async function settled(agent: Agent, id: string): Promise<Log> {
  for (;;) {
    const { body } = await agent.get(`/api/logs/${id}`).query({ wait: 30 }).expect(200);
    const { log } = body as { log: Log };
    if (!AT_WORK.has(log.status)) return log;
  }
}

/** Sends a file and waits until its figures are there. */
export async function keep(
  agent: Agent,
  propertyId: string,
  csv: string | Buffer,
  plan?: ColumnPlan | null,
  name?: string,
): Promise<Log> {
  const answer = await send(agent, propertyId, csv, plan, name);
  expect(answer.body).toMatchObject({ log: { id: expect.any(String) } });
  const log = await settled(agent, (answer.body as { log: Log }).log.id);
  expect({ status: log.status, failure: log.failure, questions: log.questions }).toEqual({
    status: 'kept',
    failure: null,
    questions: [],
  });
  return log;
}

export async function daysOf(agent: Agent, propertyId: string, from: string, to: string): Promise<DaysAnswer> {
  const { body } = await agent.get(`/api/properties/${propertyId}/days`).query({ from, to }).expect(200);
  return body as DaysAnswer;
}
