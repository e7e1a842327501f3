import { guarded, releaseGuard } from './guard.mjs';
import { endGroup, endRunning } from './processes.mjs';
import { say } from './say.mjs';

const FIRST_WAIT_MS = 200;
const LONGEST_WAIT_MS = 10_000;
/** A process that stood so long is well again: the next pause is the shortest. */
const STEADY_MS = 30_000;

const kept = new Set();
let ending = false;

/**
 * Keeps a process running: starts it, and again with growing pauses whenever it ends by itself.
 *
 * @param {string} name what it is called when we speak of it
 * @param {() => import('node:child_process').ChildProcess} launch must spawn it `detached`, in a group of its own,
 *   so that Ctrl-C reaches us alone and we decide the order
 * @param {object} options
 * @param {NodeJS.Signals} [options.signal] what asks it to end
 * @param {number} [options.graceMs] how long that may take before its whole group is killed
 * @param {boolean} [options.last] others need it: it ends after them
 */
export function supervise(name, launch, { signal = 'SIGTERM', graceMs = 10_000, last = false } = {}) {
  if (ending) throw new Error(`We are ending: the ${name} is not started.`);
  let child = null;
  let timer;
  let wait = FIRST_WAIT_MS;
  let stopping = false;
  let ends = 0;

  function start() {
    const startedAt = Date.now();
    const own = guarded(launch(), { last });
    child = own;
    let over = false;
    const ended = (why) => {
      if (over) return;
      over = true;
      child = null;
      if (stopping) return;
      ends += 1;
      if (Date.now() - startedAt > STEADY_MS) wait = FIRST_WAIT_MS;
      say(`The ${name} ended (${why}). Starting it again in ${wait / 1000} s.`);
      timer = setTimeout(start, wait);
      wait = Math.min(wait * 2, LONGEST_WAIT_MS);
    };
    own.on('error', (error) => ended(error.message));
    own.on('exit', (code, by) => ended(by ?? `code ${code}`));
  }

  async function stop() {
    stopping = true;
    clearTimeout(timer);
    if (child && !(await endGroup(child.pid, { signal, graceMs, leaderAlone: true })))
      say(`The ${name} did not end within ${graceMs / 1000} s: it was killed.`);
    kept.delete(handle);
  }

  const handle = {
    last,
    stop,
    get pid() {
      return child?.pid ?? null;
    },
    /** How often it ended by itself. */
    get ends() {
      return ends;
    },
  };
  kept.add(handle);
  start();
  return handle;
}

/** Ends everything that was started, those that others need last. Nothing can be started any more. */
export async function endAll() {
  ending = true;
  await endRunning();
  for (const last of [false, true])
    await Promise.all([...kept].filter((handle) => handle.last === last).map((handle) => handle.stop()));
  await releaseGuard();
}
