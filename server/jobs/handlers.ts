import type { Deps } from '../deps.ts';
import type { Handlers } from './names.ts';
import { sweep } from './sweep.ts';

/** Every job with its handler. A job without one does not compile. */
export function jobHandlers({ db }: Deps): Handlers {
  return {
    sweep: () => sweep(db),
  };
}
