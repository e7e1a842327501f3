import { jobHandlers } from './jobs/handlers.ts';
import { runJobs } from './jobs/runner.ts';
import { prepared } from './prepare.ts';

const CONCURRENCY = 2;
/** How long running jobs may take to end after a signal; what is cut off is taken up again elsewhere. */
const DRAIN_MS = 9000;

const { deps, failed } = await prepared('worker');
const { db, logger } = deps;
const runner = await runJobs(db, logger, jobHandlers(deps), { concurrency: CONCURRENCY }).catch(failed);
logger.info('the worker waits for jobs');

let draining = false;
for (const signal of ['SIGTERM', 'SIGINT'] as const)
  process.on(signal, () => {
    if (draining) return;
    draining = true;
    logger.info({ signal }, 'the worker drains');
    setTimeout(() => process.exit(0), DRAIN_MS).unref();
    void runner
      .stop()
      .then(() => db.close())
      .finally(() => process.exit(0));
  });
runner.ended.then(
  () => draining || failed(new Error('The job runner ended by itself.')),
  (error: unknown) => failed(error),
);
