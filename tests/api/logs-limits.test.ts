import http from 'node:http';
import type { AddressInfo } from 'node:net';
import { describe, expect, it } from 'vitest';
import { createApp } from '../../server/app.ts';
import { LEFTOVERS } from '../../server/logs/originals.service.ts';
import { useApp } from '../support/app.ts';
import { HALF_HOURS, halfHours } from '../support/csv.ts';
import { send } from '../support/worker.ts';

const WEEK = halfHours('2023-06-01T00:00:00Z', 7 * 48);
const LONG = halfHours('2000-01-01T00:00:00Z', 48 * 365 * 5);

describe('a limit on the size of a file', () => {
  const t = useApp({ uploadMaxBytes: 100_000 });

  it.each(['', '/inspect'])('when a file is larger, then 413 at logs%s, and nothing is kept', async (part) => {
    const owner = await t.person();
    const { id } = await t.property(owner);
    const call = () => owner.agent.post(`/api/properties/${id}/logs${part}`);
    const large = await call().attach('file', Buffer.from(LONG.slice(0, 100_001)), 'a.csv');
    expect([large.status, large.body.type]).toEqual([413, '/api/docs#problem-too-large']);
    expect(large.body.detail).toContain('100000 bytes');
    expect(await t.db.query('select from original_chunks where property_id = $1', [id])).toEqual([]);
    const fits = await call().attach('file', Buffer.from(LONG.slice(0, 100_000)), 'a.csv');
    expect(fits.status).toBe(part ? 200 : 202);
  });
});

describe('a quota', () => {
  const t = useApp({ quotaBytes: 30_000 });

  it('when the originals of a team’s properties would pass it, then 413 with the reason, and nothing is kept', async () => {
    const owner = await t.person();
    const [first, second] = [await t.property(owner), await t.property(owner)];
    expect(WEEK.length).toBeGreaterThan(10_000);
    expect((await send(owner.agent, first.id, WEEK, HALF_HOURS)).status).toBe(202);
    expect((await send(owner.agent, second.id, WEEK, HALF_HOURS)).status).toBe(202);
    const full = await send(owner.agent, first.id, WEEK.replaceAll('2023-06', '2023-07'), HALF_HOURS);
    expect(full.status).toBe(413);
    expect(full.body.detail).toMatch(/storage/);
    const [{ chunks }] = await t.db.query<{ chunks: number }>('select count(*)::int as chunks from original_chunks');
    expect(chunks).toBe(2);
    // What is there already costs nothing, and another team has room of its own.
    expect((await send(owner.agent, second.id, WEEK.slice(0, 5000), HALF_HOURS)).status).toBe(202);
    const other = await t.person();
    const theirs = await t.property(other);
    expect((await send(other.agent, theirs.id, WEEK, HALF_HOURS)).status).toBe(202);
  });
});

describe('a limit on uploads per minute', () => {
  const t = useApp({ uploadsPerMinute: 3 });

  it('when a team sends more, then 429 with Retry-After; another team is not concerned', async () => {
    const owner = await t.person();
    const colleague = await t.member(owner, 'member');
    const { id } = await t.property(owner);
    const post = (agent: typeof owner.agent) => send(agent, id, WEEK, HALF_HOURS);
    expect((await post(owner.agent)).status).toBe(202);
    expect((await post(colleague.agent)).status).toBe(200);
    const inspect = () =>
      owner.agent.post(`/api/properties/${id}/logs/inspect`).attach('file', Buffer.from(WEEK), 'a.csv');
    expect((await inspect()).status).toBe(200);
    const over = await post(owner.agent);
    expect([over.status, over.body.type]).toEqual([429, '/api/docs#problem-too-many']);
    expect(Number(over.headers['retry-after'])).toBeGreaterThan(0);
    const other = await t.person();
    const theirs = await t.property(other);
    expect((await send(other.agent, theirs.id, WEEK, HALF_HOURS)).status).toBe(202);
  });
});

describe('an upload that is broken off', () => {
  const t = useApp();

  it('when the caller goes away half way, then no log, no original, and nothing is left behind', async () => {
    const owner = await t.person();
    const { id } = await t.property(owner);
    const { body } = await owner.agent.post('/api/tokens').send({ name: 'script' }).expect(201);
    const server = http.createServer(await createApp(t.deps));
    await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
    const { port } = server.address() as AddressInfo;
    await new Promise<void>((resolve) => {
      const request = http.request({
        port,
        path: `/api/properties/${id}/logs`,
        method: 'POST',
        headers: {
          Authorization: `Bearer ${(body as { token: string }).token}`,
          'Content-Type': 'multipart/form-data; boundary=x',
          'Content-Length': LONG.length + 1000,
        },
      });
      request.on('error', () => resolve());
      request.write(
        `--x\r\nContent-Disposition: form-data; name="file"; filename="a.csv"\r\nContent-Type: text/csv\r\n\r\n`,
      );
      request.write(LONG.slice(0, 2_500_000), () => setTimeout(() => request.destroy(), 200));
    });
    const left = async () => {
      const [row] = await t.db.query(
        `select (select count(*)::int from logs) as logs, (select count(*)::int from originals) as originals,
           (select count(*)::int from original_chunks) as chunks`,
      );
      return row;
    };
    await expect.poll(left, { timeout: 10_000 }).toEqual({ logs: 0, originals: 0, chunks: 0 });
    await new Promise((resolve) => server.close(resolve));
  });

  it('when the process dies half way, then what it has written is swept later', async () => {
    const owner = await t.person();
    const { id } = await t.property(owner);
    for (const [n, age] of [
      [1, '5 minutes'],
      [2, '2 hours'],
    ])
      await t.db.query(
        `insert into original_chunks (property_id, hash, data, arrived_at)
         values ($1, $2, 'x', now() - $3::interval)`,
        [id, Buffer.from([Number(n)]), age],
      );
    for (const sql of LEFTOVERS) await t.db.query(sql);
    const rows = await t.db.query<{ hash: Buffer }>('select hash from original_chunks where property_id = $1', [id]);
    expect(rows.map(({ hash }) => hash[0])).toEqual([1]);
  });
});
