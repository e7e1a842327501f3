import { spawn } from 'node:child_process';
import type { ChildProcess } from 'node:child_process';
import http from 'node:http';
import { afterEach, describe, expect, it } from 'vitest';
import { useDatabase } from '../support/database.ts';
import { query } from '../support/query.ts';

const t = useDatabase();
const children: ChildProcess[] = [];

afterEach(() => {
  for (const child of children.splice(0)) child.kill('SIGKILL');
});

interface Started {
  child: ChildProcess;
  lines: Record<string, unknown>[];
  errors: () => string;
  ended: Promise<number | null>;
}

function start(entry: string, env: Record<string, string>): Started {
  const child = spawn(process.execPath, ['--import', 'tsx', `server/${entry}`], {
    env: { PATH: process.env['PATH'], NODE_ENV: 'test', DATABASE_URL: t.url, PORT: '0', ...env },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  children.push(child);
  const lines: Record<string, unknown>[] = [];
  let errors = '';
  let rest = '';
  child.stdout?.on('data', (piece: Buffer) => {
    const parts = (rest + piece.toString()).split('\n');
    rest = parts.pop() ?? '';
    for (const line of parts) lines.push(JSON.parse(line) as Record<string, unknown>);
  });
  child.stderr?.on('data', (piece: Buffer) => (errors += piece.toString()));
  const ended = new Promise<number | null>((done) => child.on('exit', done));
  return { child, lines, errors: () => errors, ended };
}

async function told(process: Started, message: string): Promise<Record<string, unknown>> {
  for (let i = 0; i < 400; i++) {
    const line = process.lines.find((entry) => entry['msg'] === message);
    if (line) return line;
    if (process.child.exitCode !== null) break;
    await new Promise((done) => setTimeout(done, 50));
  }
  throw new Error(`It did not say “${message}”, but: ${process.errors()}${JSON.stringify(process.lines)}`);
}

async function portOf(web: Started): Promise<number> {
  const { address } = (await told(web, 'the web process listens')) as { address: { port: number } };
  return address.port;
}

describe('the web process', () => {
  it('when two start together on an empty database, then both come up, and the schema is made once', async () => {
    const name = `t_processes_${process.pid}`;
    await query(t.url, `create database ${name}`);
    const url = new URL(t.url);
    url.pathname = `/${name}`;
    const both = [start('main.ts', { DATABASE_URL: url.href }), start('main.ts', { DATABASE_URL: url.href })];
    for (const web of both) {
      const answer = await fetch(`http://127.0.0.1:${await portOf(web)}/api/health`);
      expect([answer.status, await answer.json()]).toEqual([200, { status: 'ok' }]);
    }
    for (const web of both) web.child.kill('SIGTERM');
    expect(await Promise.all(both.map((web) => web.ended))).toEqual([0, 0]);
    await query(t.url, `drop database ${name} with (force)`);
  });

  it('when it is told to end during a request, then it answers that, takes no other, and ends with 0', async () => {
    const web = start('main.ts', {});
    const port = await portOf(web);
    const kept = new http.Agent({ keepAlive: true });
    // The body is still on its way when the signal comes.
    const answer = new Promise<number>((done, fail) => {
      const request = http.request(
        {
          port,
          host: '127.0.0.1',
          agent: kept,
          path: '/api/session',
          method: 'POST',
          headers: { 'Content-Type': 'application/json', 'Content-Length': 50 },
        },
        (response) => {
          response.resume().on('end', () => done(response.statusCode ?? 0));
        },
      );
      request.on('error', fail);
      request.write('{"email":"a@example.test",');
      setTimeout(() => web.child.kill('SIGTERM'), 300);
      setTimeout(() => request.end(`"password":"x"`.padEnd(23) + '}'), 800);
    });
    await told(web, 'the web process drains');
    await expect(fetch(`http://127.0.0.1:${port}/api/health/live`)).rejects.toThrow();
    expect(await answer).toBe(401);
    expect(await web.ended).toBe(0);
    kept.destroy();
  });

  it('when a setting is wrong, then it ends with 1 and names variable, value and what is expected', async () => {
    const web = start('main.ts', { PORT: 'seventy' });
    expect(await web.ended).toBe(1);
    expect(web.errors()).toMatch(/PORT is "seventy"; expected: /);
  });

  it('when its port is taken, then it ends with 1 and says so', async () => {
    const first = start('main.ts', {});
    const second = start('main.ts', { PORT: String(await portOf(first)) });
    expect(await second.ended).toBe(1);
    expect(second.errors()).toContain('EADDRINUSE');
  });

  it('when the database gives up durability, then it refuses to start and says why', async () => {
    const name = `t_careless_${process.pid}`;
    await query(t.url, `create database ${name}`);
    await query(t.url, `alter database ${name} set synchronous_commit = off`);
    const url = new URL(t.url);
    url.pathname = `/${name}`;
    const web = start('main.ts', { DATABASE_URL: url.href });
    expect(await web.ended).toBe(1);
    expect(web.errors()).toContain('PostgreSQL runs with synchronous_commit = off');
    await query(t.url, `drop database ${name} with (force)`);
  });
});

describe('the worker', () => {
  it('when it is told to end, then it ends with 0', async () => {
    const worker = start('worker.ts', {});
    await told(worker, 'the worker waits for jobs');
    worker.child.kill('SIGTERM');
    expect(await worker.ended).toBe(0);
  });
});
