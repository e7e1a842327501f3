import fs from 'node:fs';
import net from 'node:net';

/** Whether a server could listen there now. */
export function isFree(port, host = '127.0.0.1') {
  return new Promise((resolve) => {
    const probe = net.createServer();
    probe.once('error', (error) => resolve(error.code === 'EADDRNOTAVAIL' || error.code === 'EAFNOSUPPORT'));
    probe.listen({ port, host, exclusive: true }, () => probe.close(() => resolve(true)));
  });
}

/** The first free port of a range on loopback. Below the range that outgoing connections use, so that it stays ours. */
export async function freePort(seed, from = 20_000, count = 10_000) {
  for (let step = 0; step < count; step++) {
    const port = from + ((seed + step) % count);
    if (await isFree(port)) return port;
  }
  throw new Error(`No free port between ${from} and ${from + count}.`);
}

const LISTENING = '0A';

/**
 * Who listens on a port, from /proc.
 *
 * @returns {string | null} such as `process 4711 (node server.js)`; what another user's process is stays hidden
 */
export function holderOf(port) {
  const sockets = new Map();
  for (const table of ['/proc/net/tcp', '/proc/net/tcp6']) {
    const lines = fs.existsSync(table) ? fs.readFileSync(table, 'utf8').trim().split('\n').slice(1) : [];
    for (const line of lines) {
      const [, local, , state, , , , uid, , inode] = line.trim().split(/\s+/);
      if (state === LISTENING && parseInt(local.slice(local.lastIndexOf(':') + 1), 16) === port)
        sockets.set(`socket:[${inode}]`, uid);
    }
  }
  if (sockets.size === 0) return null;
  for (const pid of fs.readdirSync('/proc').filter((name) => /^\d+$/.test(name))) {
    if (opened(pid).some((link) => sockets.has(link))) {
      const command = fs.readFileSync(`/proc/${pid}/cmdline`, 'utf8').replaceAll('\0', ' ').trim();
      return `process ${pid} (${command})`;
    }
  }
  return `a process of the user with id ${[...sockets.values()][0]}`;
}

function opened(pid) {
  try {
    return fs.readdirSync(`/proc/${pid}/fd`).map((fd) => {
      try {
        return fs.readlinkSync(`/proc/${pid}/fd/${fd}`);
      } catch {
        return '';
      }
    });
  } catch {
    return [];
  }
}
