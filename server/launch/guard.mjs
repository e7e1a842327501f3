import { spawn } from 'node:child_process';

/**
 * A few kilobytes of shell that outlive us: when our end of its pipe closes, because we ended or were killed,
 * it asks the process groups it was last told of to end, kills them after ten seconds, and then stops the
 * database. After an orderly end nothing is left for it to do.
 */
const SCRIPT = `
first= last=
while IFS='|' read -r first_now last_now; do first=$first_now last=$last_now; done
for pid in $first; do kill -s TERM -- "-$pid"; done
tries=0
for pid in $first; do
  while kill -s 0 -- "-$pid" && [ $tries -lt 100 ]; do sleep 0.1; tries=$((tries + 1)); done
  kill -s KILL -- "-$pid"
done
for pid in $last; do kill -s INT "$pid"; done
`;

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

function startGuard() {
  const child = spawn('/bin/sh', ['-c', SCRIPT, 'coppernoon-guard'], {
    cwd: '/',
    detached: true,
    stdio: ['pipe', 'ignore', 'ignore'],
  });
  child.unref();
  child.stdin.unref();
  child.stdin.on('error', () => undefined);
  return child;
}
