import { spawn } from 'node:child_process';
import type { ChildProcess } from 'node:child_process';
import { createHash, randomBytes } from 'node:crypto';
import net from 'node:net';
import path from 'node:path';
import { setTimeout as wait } from 'node:timers/promises';
import { newDatabase, newPlace } from './place.ts';
import type { Place } from './place.ts';
import { YEAR_PLAN } from './year.ts';

const ROOT = path.resolve(import.meta.dirname, '../..');

/** A running web process and worker, called over HTTP with a token. */
export interface Product {
  place: Place;
  base: string;
  headers: Record<string, string>;
  /** The id of a log, once it is acknowledged. */
  send(propertyId: string, csv: Buffer): Promise<string>;
  kept(logId: string): Promise<void>;
  close(): Promise<void>;
}

async function freePort(): Promise<number> {
  const server = net.createServer();
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as net.AddressInfo;
  await new Promise((resolve) => server.close(resolve));
  return port;
}

function start(entry: string, env: Record<string, string>): ChildProcess {
  return spawn(process.execPath, ['--import', 'tsx', entry], {
    cwd: ROOT,
    stdio: ['ignore', 'ignore', 'inherit'],
    env: { PATH: process.env.PATH, NODE_ENV: 'production', LOG_LEVEL: 'warn', ...env },
  });
}

export async function startProduct({ worker = true } = {}): Promise<Product> {
  const url = await newDatabase();
  const port = await freePort();
  const env = { DATABASE_URL: url, PORT: String(port), DEMO: 'off', UPLOADS_PER_MINUTE: '100000' };
  const children = [start('server/main.ts', env), ...(worker ? [start('server/worker.ts', env)] : [])];
  const base = `http://127.0.0.1:${port}`;
  const place = await newPlace(url);
  const token = randomBytes(32).toString('base64url');
  await place.deps.db.query(`insert into tokens (id, person_id, name, hash) values ('bench', $1, 'bench', $2)`, [
    place.person.id,
    createHash('sha256').update(token).digest(),
  ]);
  const headers = { Authorization: `Bearer ${token}` };
  for (let tries = 0; ; tries++) {
    const healthy = await fetch(`${base}/api/health`).then(
      ({ ok }) => ok,
      () => false,
    );
    if (healthy) break;
    if (tries > 300) throw new Error('The web process did not come up.');
    await wait(100);
  }
  return {
    place,
    base,
    headers,
    send: async (propertyId, csv) => {
      const form = new FormData();
      form.append('plan', JSON.stringify(YEAR_PLAN));
      form.append('file', new Blob([new Uint8Array(csv)]), 'year.csv');
      const answer = await fetch(`${base}/api/properties/${propertyId}/logs`, { method: 'POST', headers, body: form });
      const body = (await answer.json()) as { log?: { id: string } };
      if (answer.status !== 202 || !body.log) throw new Error(`${answer.status} ${JSON.stringify(body)}`);
      return body.log.id;
    },
    kept: async (logId) => {
      for (;;) {
        const answer = await fetch(`${base}/api/logs/${logId}?wait=30`, { headers });
        const { log } = (await answer.json()) as { log: { status: string; failure: string | null } };
        if (log.status === 'kept') return;
        if (log.status !== 'waiting' && log.status !== 'reading') throw new Error(`${log.status}: ${log.failure}`);
      }
    },
    close: async () => {
      await Promise.all(
        children.map((child) => {
          const ended = new Promise((resolve) => child.once('exit', resolve));
          child.kill('SIGTERM');
          return ended;
        }),
      );
      await place.close();
    },
  };
}
