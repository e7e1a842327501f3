import type { Deps } from '../deps.ts';
import { readLogJob, refreshJob } from '../ingest/ingest.service.ts';
import type { Handlers } from './names.ts';
import { sweep } from './sweep.ts';

/** Every job with its handler. A job without one does not compile. */
export function jobHandlers(deps: Deps): Handlers {
  return {
    sweep: () => sweep(deps.db),
    readLog: (payload, context) => readLogJob(deps, payload, context),
    refreshFigures: (payload) => refreshJob(deps, payload),
  };
}
