import fs from 'node:fs';
import { startOf, until } from './processes.mjs';

/**
 * Takes a lock that a process of this machine holds while it lives. One left by a process that was killed is void.
 *
 * @returns {{ release: () => void, wasLeft: boolean } | { heldBy: number }} the lock, and whether somebody who was
 *   killed had it last; or the id of the process that has it
 */
export function takeLock(file) {
  const mine = `${process.pid} ${startOf(process.pid)}`;
  for (let wasLeft = false; ; wasLeft = true) {
    try {
      fs.writeFileSync(file, mine, { flag: 'wx' });
      return { release: () => fs.rmSync(file, { force: true }), wasLeft };
    } catch (error) {
      if (error.code !== 'EEXIST') throw error;
    }
    const holder = readIfThere(file);
    const [pid, start] = holder.split(' ');
    if (pid && startOf(pid) === start) return { heldBy: Number(pid) };
    if (readIfThere(file) === holder) fs.rmSync(file, { force: true });
  }
}

/** Does `work` while no other process does work under the same lock; `onWait` hears who has it. */
export async function withLock(file, onWait, work) {
  let lock = takeLock(file);
  if ('heldBy' in lock) {
    onWait(lock.heldBy);
    await until(() => 'release' in (lock = takeLock(file)), 15 * 60_000, 200);
    if ('heldBy' in lock) throw new Error(`Process ${lock.heldBy} still holds ${file}.`);
  }
  try {
    return await work();
  } finally {
    lock.release();
  }
}

function readIfThere(file) {
  try {
    return fs.readFileSync(file, 'utf8');
  } catch {
    return '';
  }
}
