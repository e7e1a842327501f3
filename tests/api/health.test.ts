import net from 'node:net';
import supertest from 'supertest';
import { describe, expect, it } from 'vitest';
import { createApp } from '../../server/app.ts';
import { openDatabase } from '../../server/database/connection.ts';
import { useApp } from '../support/app.ts';

const t = useApp();

describe('GET /api/health', () => {
  it('when the database is reachable and migrated, then 200 and ok', async () => {
    const answer = await t.nobody().get('/api/health');
    expect(answer.status).toBe(200);
    expect(answer.body).toEqual({ status: 'ok' });
    expect(answer.headers['x-request-id']).toMatch(/^[0-9a-f-]{36}$/);
  });

  it('when a migration has not run, then 503 and why', async () => {
    const [last] = await t.db.query<{ name: string }>('delete from migrations where name = $1 returning name', [
      '0004-workers',
    ]);
    const answer = await t.nobody().get('/api/health');
    await t.db.query('insert into migrations (name) values ($1)', [last?.name]);
    expect(answer.status).toBe(503);
    expect(answer.body).toMatchObject({
      type: '/api/docs#problem-unavailable',
      status: 503,
      detail: expect.stringContaining('not up to date'),
    });
  });

  it('when the database cannot be reached, then 503 as problem details; live still answers; it recovers by itself', async () => {
    const line = await cutable(t.deps.config.databaseUrl);
    const db = openDatabase(line.url);
    const agent = supertest(await createApp({ ...t.deps, db }));
    await agent.get('/api/health').expect(200);
    await line.cut();
    const down = await agent.get('/api/health');
    const live = await agent.get('/api/health/live');
    await line.mend();
    const up = await agent.get('/api/health');
    await db.close();
    await line.cut();
    expect(down.status).toBe(503);
    expect(down.body.type).toBe('/api/docs#problem-unavailable');
    expect(down.text).not.toMatch(/postgres|5432|database ".*"/i);
    expect(live.body).toEqual({ status: 'ok' });
    expect(up.status).toBe(200);
  });
});

describe('every answer', () => {
  it('when it is sent, then it carries the strict headers, and HSTS only behind TLS', async () => {
    const { headers } = await t.nobody().get('/api/health');
    const policy = String(headers['content-security-policy']);
    expect(policy).toContain(`default-src 'self'`);
    expect(policy).toContain(`script-src 'self';`);
    expect(policy).toContain(`frame-ancestors 'none'`);
    expect(policy).not.toMatch(/unsafe-eval|script-src[^;]*unsafe|https?:/);
    expect(headers['x-content-type-options']).toBe('nosniff');
    expect(headers['cache-control']).toBe('no-store');
    expect(headers['x-powered-by']).toBeUndefined();
    expect(headers['strict-transport-security']).toBeUndefined();
  });

  it('when the address does not exist, then 404 as problem details, never a page of HTML', async () => {
    for (const path of ['/api', '/api/nothing', '/api/properties/x/y/z', '/nothing.js', '/api/%ff']) {
      const answer = await t.nobody().get(path);
      expect(answer.headers['content-type']).toMatch(/^application\/problem\+json/);
      expect([400, 404]).toContain(answer.status);
    }
  });

  it('when something unexpected breaks, then it is shown vaguely and logged whole, under the same request id', async () => {
    const { agent } = await t.person();
    await t.db.query('alter table tokens rename to tokens_elsewhere');
    const answer = await agent.get('/api/tokens');
    await t.db.query('alter table tokens_elsewhere rename to tokens');
    expect(answer.status).toBe(500);
    expect(answer.body).toEqual({
      type: '/api/docs#problem-unexpected',
      title: 'Something went wrong on our side',
      status: 500,
      detail: expect.any(String),
      requestId: answer.headers['x-request-id'],
    });
    expect(answer.text).not.toMatch(/relation|tokens/);
    const logged = t.log.filter((line) => line.includes(String(answer.body.requestId))).join('');
    expect(logged).toContain('relation \\"tokens\\" does not exist');
  });

  it('when the method is not one of the address, then 405 with Allow', async () => {
    const answer = await t.nobody().put('/api/session').send({});
    expect(answer.status).toBe(405);
    expect(answer.headers['allow']).toBe('HEAD, POST, GET, DELETE');
  });
});

/** A line to the database that can be cut and mended. */
async function cutable(url: string) {
  const target = new URL(url);
  const open = new Set<net.Socket>();
  const server = net.createServer((socket) => {
    const onward = net.connect(Number(target.port), target.hostname);
    for (const [end, other] of [
      [socket, onward],
      [onward, socket],
    ] as const) {
      open.add(end);
      end.pipe(other);
      end.on('error', () => other.destroy()).on('close', () => (open.delete(end), other.destroy()));
    }
  });
  const listen = (port: number) => new Promise<void>((done) => server.listen(port, '127.0.0.1', done));
  await listen(0);
  const { port } = server.address() as net.AddressInfo;
  const through = new URL(url);
  through.hostname = '127.0.0.1';
  through.port = String(port);
  return {
    url: through.href,
    cut: () =>
      new Promise<void>((done) => {
        server.close(() => done());
        for (const socket of open) socket.destroy();
      }),
    mend: () => listen(port),
  };
}
