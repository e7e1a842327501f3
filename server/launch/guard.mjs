import { spawn } from 'node:child_process';
import path from 'node:path';

const watched = { first: new Set(), last: new Set() };
let guard = null;

/**
 * Has a process end with us, however we end. It must have been spawned `detached`.
 *
 * @param {import('node:child_process').ChildProcess} child
 * @param {{ last?: boolean }} options `last`: it is interrupted alone, after the groups of all others are gone
 */
export function guarded(child, { last = false } = {}) {
  if (child.pid === undefined) return child;
  const pids = last ? watched.last : watched.first;
  pids.add(child.pid);
  child.once('exit', () => {
    pids.delete(child.pid);
    tell();
  });
  tell();
  return child;
}

/** Lets the guard go and waits until it has. */
export async function releaseGuard() {
  if (!guard) return;
  const own = guard;
  guard = null;
  own.ref();
  const gone = new Promise((resolve) => own.once('exit', resolve));
  own.stdin.end();
  await gone;
}

function tell() {
  guard ??= startGuard();
  guard.stdin.write(`${[...watched.first].join(' ')}|${[...watched.last].join(' ')}\n`);
}

/** A few kilobytes of shell that outlive us. After an orderly end nothing is left for it to do. */
function startGuard() {
  const child = spawn('/bin/sh', [path.join(import.meta.dirname, 'guard.sh')], {
    cwd: '/',
    detached: true,
    stdio: ['pipe', 'ignore', 'ignore'],
  });
  child.unref();
  child.stdin.unref();
  child.stdin.on('error', () => undefined);
  return child;
}
