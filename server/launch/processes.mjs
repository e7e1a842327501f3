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
  const groups = [...running].filter(([, mustFinish]) => !mustFinish).map(([child]) => child.pid);
  await Promise.all(groups.map((pid) => endGroup(pid)));
  await until(() => running.size === 0, 15 * 60_000);
}

/**
 * Ends a process and all it has started: asks its leader, waits, kills who is left.
 *
 * @param {number} pid leader of a group
 * @returns {Promise<boolean>} whether all of them went by themselves
 */
export async function endGroup(pid, { signal = 'SIGTERM', graceMs = 10_000, leaderAlone = false } = {}) {
  send(leaderAlone ? pid : -pid, signal);
  if (await until(() => !send(-pid, 0), graceMs)) return true;
  send(-pid, 'SIGKILL');
  await until(() => !send(-pid, 0), 5000);
  return false;
}

/** Whether there was somebody to get the signal. */
function send(pid, signal) {
  try {
    return process.kill(pid, signal);
  } catch {
    return false;
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
