import { spawn } from 'node:child_process';
import fs from 'node:fs';

const running = new Set();

/**
 * Runs a command to its end. What it prints goes to our error stream, or with `quiet` into the result.
 *
 * @param {string} command
 * @param {string[]} args
 * @param {import('node:child_process').SpawnOptions & { quiet?: boolean, input?: string }} options
 * @returns {Promise<{ code: number, output: string }>} code 127 if it could not be run, 128 if a signal ended it
 */
export function run(command, args, { quiet = false, input, ...options } = {}) {
  return new Promise((resolve) => {
    const [, ...rest] = options.stdio ?? [];
    const [, , ...more] = rest;
    const out = quiet ? 'pipe' : 2;
    const child = spawn(command, args, {
      ...options,
      stdio: [input === undefined ? 'ignore' : 'pipe', out, out, ...more],
    });
    running.add(child);
    let output = '';
    for (const stream of [child.stdout, child.stderr]) stream?.on('data', (piece) => (output += piece));
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

/** Ends what `run` has under way. */
export function endRunning() {
  for (const child of running) child.kill('SIGTERM');
}

/** When a process was started, in ticks since boot: with it a process id is told from a later one of the same number. */
export function startOf(pid) {
  try {
    const stat = fs.readFileSync(`/proc/${pid}/stat`, 'utf8');
    return stat.slice(stat.lastIndexOf(')') + 2).split(' ')[19];
  } catch {
    return null;
  }
}

/** Whether a process is there and has not ended; a zombie has. */
export function isAlive(pid) {
  try {
    const stat = fs.readFileSync(`/proc/${pid}/stat`, 'utf8');
    return stat[stat.lastIndexOf(')') + 2] !== 'Z';
  } catch {
    return false;
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
