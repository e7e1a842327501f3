import { say } from './say.mjs';
import { until } from './processes.mjs';

const FIRST_WAIT_MS = 200;
const LONGEST_WAIT_MS = 10_000;
/** A process that stood so long is well again: the next wait is the shortest. */
const STEADY_MS = 30_000;

/**
 * Keeps a process running: starts it, and again with growing pauses whenever it ends by itself.
 *
 * @param {string} name what it is called when we speak of it
 * @param {() => import('node:child_process').ChildProcess} launch must spawn it `detached`, in a group of its own,
 *   so that Ctrl-C reaches us alone and we decide the order
 * @param {object} options
 * @param {NodeJS.Signals} [options.signal] what asks it to end
 * @param {number} [options.graceMs] how long it may take before its whole group is killed
 * @param {() => void} [options.changed] hears of every new or ended process
 */
export function supervise(name, launch, { signal = 'SIGTERM', graceMs = 10_000, changed = () => undefined } = {}) {
  let child = null;
  let timer;
  let wait = FIRST_WAIT_MS;
  let stopping = false;
  let ends = 0;

  function start() {
    const startedAt = Date.now();
    const own = launch();
    child = own;
    let over = false;
    const ended = (why) => {
      if (over) return;
      over = true;
      child = null;
      changed();
      if (stopping) return;
      ends += 1;
      if (Date.now() - startedAt > STEADY_MS) wait = FIRST_WAIT_MS;
      say(`The ${name} ended (${why}). Starting it again in ${wait / 1000} s.`);
      timer = setTimeout(start, wait);
      wait = Math.min(wait * 2, LONGEST_WAIT_MS);
    };
    own.on('error', (error) => ended(error.message));
    own.on('exit', (code, by) => ended(by ?? `code ${code}`));
    changed();
  }

  start();
  return {
    get pid() {
      return child?.pid ?? null;
    },
    /** How often it ended by itself. */
    get ends() {
      return ends;
    },
    async stop() {
      stopping = true;
      clearTimeout(timer);
      const own = child;
      if (!own) return;
      own.kill(signal);
      if (await until(() => own !== child, graceMs)) return;
      say(`The ${name} did not end within ${graceMs / 1000} s: killed.`);
      try {
        process.kill(-own.pid, 'SIGKILL');
      } catch {
        // It ended at this very moment.
      }
      await until(() => own !== child, 5000);
    },
  };
}
