import { spawn } from 'node:child_process';
import fs from 'node:fs';
import { guarded } from './guard.mjs';

const running = new Map();
let ending = false;

/**
 * Runs a command to its end. It ends with us.
 *
 * @param {string} command
 * @param {string[]} args
 * @param {object} options those of `spawn`, and:
 * @param {1 | 2} [options.out] the stream of ours on which its output appears
 * @param {boolean} [options.quiet] its output is in the result instead
 * @param {string} [options.input] what it reads
 * @param {boolean} [options.mustFinish] breaking it off would leave a mess: whoever ends us waits for it
 * @returns {Promise<{ code: number, output: string }>} code 127 if it could not be run, 128 if a signal ended it
 */
export function run(command, args, { out = 2, quiet = false, input, mustFinish = false, stdio = [], ...options } = {}) {
  if (ending) return Promise.resolve({ code: 128, output: 'We are ending.' });
  return new Promise((resolve) => {
    const stream = quiet ? 'pipe' : out;
    const first = input === undefined ? 'ignore' : 'pipe';
    const child = spawn(command, args, {
      ...options,
      detached: true,
      stdio: [first, stream, stream, ...stdio.slice(3)],
    });
    guarded(child);
    running.set(child, mustFinish);
    let output = '';
    for (const pipe of [child.stdout, child.stderr]) pipe?.on('data', (piece) => (output += piece));
    if (input !== undefined) child.stdin.on('error', () => undefined).end(input);
    child.on('error', (error) => {
      running.delete(child);
      resolve({ code: 127, output: `${command}: ${error.message}` });
    });
    child.on('close', (code) => {
      running.delete(child);
      resolve({ code: code ?? 128, output });
    });
  });
}

/** Ends what `run` has under way; nothing can be run any more. */
export async function endRunning() {
  ending = true;
  const signal = (name) => {
    for (const [child, mustFinish] of running) if (!mustFinish) signalGroup(child.pid, name);
  };
  signal('SIGTERM');
  if (!(await until(() => ![...running.values()].includes(false), 15_000))) signal('SIGKILL');
  await until(() => running.size === 0, 15 * 60_000);
}

/** Sends a signal to a process and all it has started. */
export function signalGroup(pid, signal) {
  try {
    process.kill(-pid, signal);
  } catch {
    // It ended at this very moment.
  }
}

/** When a process was started, in ticks since boot: with it a process id is told from a later one of the same number. */
export function startOf(pid) {
  return statOf(pid)?.[19] ?? null;
}

/** Whether a process is there and has not ended; a zombie has. */
export function isAlive(pid) {
  const state = statOf(pid)?.[0];
  return state !== undefined && state !== 'Z';
}

/** The fields of /proc/<pid>/stat after the name, which may hold spaces. */
function statOf(pid) {
  try {
    const stat = fs.readFileSync(`/proc/${pid}/stat`, 'utf8');
    return stat.slice(stat.lastIndexOf(')') + 2).split(' ');
  } catch {
    return null;
  }
}

/** Waits until `done()` holds, looking every few milliseconds. Returns whether it did in time. */
export async function until(done, ms, every = 25) {
  const end = Date.now() + ms;
  while (Date.now() < end) {
    if (await done()) return true;
    await new Promise((resolve) => setTimeout(resolve, every));
  }
  return Boolean(await done());
}
