import type { Tx } from '../database/connection.ts';
import type { JobName, JobPayloads } from './names.ts';

export interface JobOptions {
  /** Jobs of one queue run one at a time, in order. */
  queueName?: string;
  /** A waiting job of the same key is replaced, so that one run answers for all who asked. */
  jobKey?: string;
  runAt?: Date;
  maxAttempts?: number;
}

/**
 * Queues a job inside the caller's transaction: it exists if and only if that commits.
 */
export async function addJob<Name extends JobName>(
  tx: Tx,
  name: Name,
  payload: JobPayloads[Name],
  { queueName, jobKey, runAt, maxAttempts }: JobOptions = {},
): Promise<void> {
  await tx.query(
    `select graphile_worker.add_job($1, payload := $2::json, queue_name := $3, run_at := $4,
       job_key := $5, max_attempts := $6)`,
    [name, JSON.stringify(payload), queueName ?? null, runAt ?? null, jobKey ?? null, maxAttempts ?? null],
  );
}
