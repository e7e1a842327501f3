import { createHash } from 'node:crypto';
import { gzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import type { Response, Test } from 'supertest';
import type { Log } from '../../shared/api/log.ts';
import type { ColumnPlan, Inspection } from '../../shared/api/plan.ts';
import { useApp } from '../support/app.ts';
import { HALF_HOURS, halfHours } from '../support/csv.ts';
import { daysOf, keep, send, settled, useWorker } from '../support/worker.ts';

const t = useApp();
useWorker(t);

const bytes = (buffer: Buffer) => createHash('sha256').update(buffer).digest('hex');
const WEEK = halfHours('2023-06-01T00:00:00Z', 7 * 48);
const NO_FILE = 'no file was sent';

/** A household with a property, whose days are those of UTC. */
async function home() {
  const owner = await t.person();
  const { id } = await t.property(owner, { timeZone: 'UTC' });
  return { owner, agent: owner.agent, id };
}

async function stored(id: string) {
  const [row] = await t.db.query<Record<string, number>>(
    `select (select count(*)::int from logs where property_id = $1) as logs,
       (select count(*)::int from log_blocks where property_id = $1) as refs,
       (select count(*)::int from day_blocks where property_id = $1) as blocks,
       (select count(*)::int from originals where property_id = $1) as originals,
       (select count(*)::int from original_chunks where property_id = $1) as chunks,
       (select count(*)::int from days where property_id = $1) as days`,
    [id],
  );
  return row;
}

describe('POST /api/properties/:id/logs', () => {
  it('when a file comes with its plan, then 202, and it is kept with its counts', async () => {
    const { agent, id, owner } = await home();
    const answer = await send(agent, id, WEEK, HALF_HOURS, 'first week.csv');
    expect(answer.status).toBe(202);
    expect(answer.body).toEqual({
      log: {
        id: `${id}-1`,
        propertyId: id,
        fileName: 'first week.csv',
        bytes: WEEK.length,
        uploadedAt: expect.stringMatching(/^\d{4}-\d\d-\d\dT.*Z$/),
        uploadedBy: owner.name,
        status: expect.stringMatching(/^(waiting|reading|kept)$/),
        progress: expect.any(Number),
        rows: { read: 0, accepted: 0, rejected: 0, unchanged: 0 },
        from: null,
        to: null,
        plan: HALF_HOURS,
        questions: [],
        problems: [],
        sample: null,
        failure: null,
      },
    });
    const log = await settled(agent, `${id}-1`);
    expect(log).toMatchObject({
      status: 'kept',
      progress: 1,
      rows: { read: 336, accepted: 336, rejected: 0, unchanged: 0 },
      from: '2023-06-01T00:00:00.000Z',
      to: '2023-06-07T23:30:00.000Z',
      plan: HALF_HOURS,
      problems: [],
    });
    expect(log.sample?.header).toEqual(['time', 'export_w', 'diversion_w']);
    const { days } = await daysOf(agent, id, '2023-06-01', '2023-06-07');
    // 48 half hours of 200 W and 1,000 W.
    for (const day of days) expect([day.exportKwh, day.heaterKwh]).toEqual([4.8, 24]);
    expect(await stored(id)).toEqual({ logs: 1, refs: 7, blocks: 7, originals: 1, chunks: 1, days: 7 });
    const property = await agent.get(`/api/properties/${id}`).expect(200);
    expect(property.body).toMatchObject({ firstDay: '2023-06-01', lastDay: '2023-06-07' });
    const trail = await agent.get(`/api/properties/${id}/trail`);
    if (trail.status === 200)
      expect(trail.body.entries[0]).toMatchObject({ act: 'log sent', about: { log: 1, fileName: 'first week.csv' } });
  });

  it('when the same bytes come again, then 200, same, and nothing is written', async () => {
    const { agent, id } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    const before = await stored(id);
    for (const plan of [HALF_HOURS, null]) {
      const again = await send(agent, id, WEEK, plan, 'another name.csv');
      expect(again.status).toBe(200);
      expect(again.body).toMatchObject({ same: true, log: { id: `${id}-1`, status: 'kept', fileName: 'log.csv' } });
    }
    expect(await stored(id)).toEqual(before);
  });

  it('when the same bytes come with another plan, then they are another log, kept once', async () => {
    const { agent, id } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    const other: ColumnPlan = { ...HALF_HOURS, columns: [HALF_HOURS.columns[0]] };
    const log = await keep(agent, id, WEEK, other);
    expect(log.id).toBe(`${id}-2`);
    expect(await stored(id)).toMatchObject({ logs: 2, originals: 1, chunks: 1, refs: 14, blocks: 14 });
  });

  it('when a file has grown, then only what is new is written', async () => {
    const { agent, id } = await home();
    const long = halfHours('2010-01-01T00:00:00Z', 48 * 365 * 3);
    expect(long.length).toBeGreaterThan(2 ** 20);
    await keep(agent, id, long.slice(0, long.indexOf('2012-06-01T00')), HALF_HOURS);
    const before = await stored(id);
    await keep(agent, id, long, HALF_HOURS);
    const after = await stored(id);
    expect(after.chunks).toBe(before.chunks + 1);
    expect(after.blocks).toBe(1095);
    expect(after.refs).toBe(before.refs + 1095);
  }, 60_000);

  it('when a file comes without a plan and leaves no question, then it is kept by the plan found', async () => {
    const { agent, id } = await home();
    const answer = await send(agent, id, WEEK);
    expect(answer.status).toBe(202);
    const log = await settled(agent, `${id}-1`);
    expect(['kept', 'asking']).toContain(log.status);
    expect(log.plan?.columns.map(({ channel }) => channel)).toEqual(['export', 'diversion']);
  });

  it.each([
    ['a picture', Buffer.from('89504e470d0a1a0a0000000d49484452000000010000000108060000001f15c489', 'hex')],
    ['prose', Buffer.from('The boiler was serviced on Monday.\nNothing was found.\n')],
    ['nothing', Buffer.alloc(0)],
    ['blank lines', Buffer.from('\n\n   \n')],
  ])('when the file is %s, then 422 with the reason, and nothing is kept', async (_what, file) => {
    const { agent, id } = await home();
    const answer = await send(agent, id, file);
    expect(answer.status).toBe(422);
    expect(answer.body).toMatchObject({ type: '/api/docs#problem-bad-fields', status: 422 });
    expect(answer.body.errors[0]).toEqual({ path: 'file', message: expect.any(String) });
    expect(await stored(id)).toMatchObject({ logs: 0, originals: 0, chunks: 0 });
  });

  it('when the plan names a column that is not there, then 422 and nothing is kept', async () => {
    const { agent, id } = await home();
    const plan = { ...HALF_HOURS, columns: [{ ...HALF_HOURS.columns[0], column: 'sun' }] };
    const answer = await send(agent, id, WEEK, plan);
    expect(answer.status).toBe(422);
    expect(JSON.stringify(answer.body.errors)).toContain('sun');
    expect(await stored(id)).toMatchObject({ logs: 0, originals: 0, chunks: 0 });
  });

  it.each([
    ['is not JSON', '{', 'plan'],
    ['lacks its columns', JSON.stringify({ ...HALF_HOURS, columns: [] }), 'plan.columns'],
    [
      'has a unit that its channel does not take',
      JSON.stringify({ ...HALF_HOURS, columns: [{ ...HALF_HOURS.columns[0], unit: 'C' }] }),
      'plan.columns[0].unit',
    ],
  ])('when the plan %s, then 422 names the field', async (_what, plan, path) => {
    const { agent, id } = await home();
    const answer = await agent
      .post(`/api/properties/${id}/logs`)
      .field('plan', plan)
      .attach('file', Buffer.from(WEEK), 'a.csv');
    expect(answer.status).toBe(422);
    expect(answer.body.errors.map((error: { path: string }) => error.path)).toContain(path);
    expect(await stored(id)).toMatchObject({ logs: 0, originals: 0, chunks: 0 });
  });

  it('when the plan stands after the file, then it counts all the same', async () => {
    const { agent, id } = await home();
    const answer = await agent
      .post(`/api/properties/${id}/logs`)
      .attach('file', Buffer.from(WEEK), 'a.csv')
      .field('plan', JSON.stringify(HALF_HOURS));
    expect(answer.status).toBe(202);
    expect(answer.body.log.plan).toEqual(HALF_HOURS);
  });

  it('when there is no file, a wrong field or no form, then it is said', async () => {
    const { agent, id } = await home();
    const path = `/api/properties/${id}/logs`;
    const none = await agent.post(path).field('plan', '');
    expect([none.status, none.body.errors]).toEqual([422, [{ path: 'file', message: NO_FILE }]]);
    const unknown = await agent.post(path).field('note', 'x').attach('file', Buffer.from(WEEK), 'a.csv');
    expect([unknown.status, unknown.body.errors[0].path]).toEqual([422, 'note']);
    const other = await agent.post(path).attach('csv', Buffer.from(WEEK), 'a.csv');
    expect([other.status, other.body.errors[0].path]).toEqual([422, 'csv']);
    const json = await agent.post(path).send({ file: 'x' });
    expect(json.status).toBe(415);
    const empty = await agent.post(path);
    expect([empty.status, empty.body.errors]).toEqual([422, [{ path: 'file', message: NO_FILE }]]);
  });

  it('when a name is odd, then it is made plain, and is safe in a download', async () => {
    const { agent, id } = await home();
    const answer = await send(agent, id, WEEK, HALF_HOURS, '../../été "x"\r\nSet-Cookie: a=b.csv');
    expect(answer.body.log.fileName).not.toMatch(/[\r\n/\\]/);
    const original = await agent.get(`/api/logs/${id}-1/original`).buffer(true).parse(binary);
    expect(original.headers['set-cookie']).toBeUndefined();
    expect(original.headers['content-disposition']).toMatch(/^attachment; filename/);
  });

  it('when a file is packed by gzip, then it is read, and comes back as it was sent', async () => {
    const { agent, id } = await home();
    const packed = gzipSync(WEEK);
    const log = await keep(agent, id, packed, HALF_HOURS, 'week.csv.gz');
    expect(log.rows.accepted).toBe(336);
    const original = await agent.get(`/api/logs/${log.id}/original`).buffer(true).parse(binary);
    expect(bytes(original.body as Buffer)).toBe(bytes(packed));
  });

  it('when nobody is signed in 401, another’s property 404, a reader of the team 403', async () => {
    const { id, owner } = await home();
    expect((await send(t.nobody(), id, WEEK, HALF_HOURS)).status).toBe(401);
    const stranger = await t.person();
    expect((await send(stranger.agent, id, WEEK, HALF_HOURS)).status).toBe(404);
    const reader = await t.member(owner, 'reader');
    expect((await send(reader.agent, id, WEEK, HALF_HOURS)).status).toBe(403);
    expect(await stored(id)).toMatchObject({ logs: 0, chunks: 0 });
  });

  it('when an Idempotency-Key comes again, then the same log; with other bytes 422; a withdrawn log stays withdrawn', async () => {
    const { agent, id } = await home();
    const post = (csv: string, key: string) => send(agent, id, csv, HALF_HOURS).set('Idempotency-Key', key);
    const first = await post(WEEK, 'upload-1');
    expect(first.status).toBe(202);
    await settled(agent, `${id}-1`);
    await agent.delete(`/api/logs/${id}-1`).expect(204);
    const again = await post(WEEK, 'upload-1');
    expect([again.status, again.body.log.id, again.body.log.status]).toEqual([200, `${id}-1`, 'withdrawn']);
    const other = await post(halfHours('2024-01-01T00:00:00Z', 10), 'upload-1');
    expect([other.status, other.body.errors[0].path]).toEqual([422, 'Idempotency-Key']);
    const bad = await post(WEEK, 'two words');
    expect(bad.status).toBe(422);
  });
});

describe('POST /api/properties/:id/logs/inspect', () => {
  it('when a file comes, then how it would be read, and nothing is kept', async () => {
    const { agent, id } = await home();
    const answer = await agent.post(`/api/properties/${id}/logs/inspect`).attach('file', Buffer.from(WEEK), 'a.csv');
    expect(answer.status).toBe(200);
    const found = answer.body as Inspection;
    expect(Object.keys(found).sort()).toEqual(['confidence', 'plan', 'problems', 'questions', 'sample']);
    expect(found.plan?.columns.map(({ channel, unit }) => [channel, unit])).toEqual([
      ['export', 'W'],
      ['diversion', 'W'],
    ]);
    expect(await stored(id)).toMatchObject({ logs: 0, originals: 0, chunks: 0 });
  });

  it.each(['before', 'after'])('when a plan stands %s the file, then it is looked at by that plan', async (where) => {
    const { agent, id } = await home();
    const plan = { ...HALF_HOURS, columns: [HALF_HOURS.columns[1]] };
    const call = agent.post(`/api/properties/${id}/logs/inspect`);
    if (where === 'before') call.field('plan', JSON.stringify(plan));
    call.attach('file', Buffer.from(WEEK), 'a.csv');
    if (where === 'after') call.field('plan', JSON.stringify(plan));
    const answer = await call;
    expect(answer.status).toBe(200);
    expect(answer.body.plan.columns).toEqual(plan.columns);
    expect(answer.body.sample.readings[0]).toEqual({ line: 2, at: '2023-06-01T00:00:00.000Z', values: [1000] });
  });

  it('when it is no table, then 422 with line and reason; strangers 404', async () => {
    const { agent, id } = await home();
    const prose = Buffer.from('Nothing to see here.\nReally.\n');
    const path = `/api/properties/${id}/logs/inspect`;
    expect((await agent.post(path).attach('file', prose, 'a.txt')).status).toBe(422);
    expect((await agent.post(path).field('plan', '')).status).toBe(422);
    const stranger = await t.person();
    expect((await stranger.agent.post(path).attach('file', Buffer.from(WEEK), 'a.csv')).status).toBe(404);
    expect((await t.nobody().post(path).attach('file', Buffer.from(WEEK), 'a.csv')).status).toBe(401);
  });
});

describe('a log that leaves a question', () => {
  // A bell of power and a saw of temperatures under headings that name no channel.
  const UNCLEAR = (month: string) =>
    halfHours(`2023-${month}-01T00:00:00Z`, 7 * 48, (i) => [
      Math.round(Math.max(0, 3000 * Math.sin((((i % 48) - 12) / 24) * Math.PI))),
      40 + (i % 9),
    ]).replace('export_w,diversion_w', 'power (W),water');

  it('when it is sent, then it asks; when answered, then it is kept; the next of its shape goes straight through', async () => {
    const { agent, id } = await home();
    const sent = await send(agent, id, UNCLEAR('06'), null, 'unclear.csv');
    expect(sent.status).toBe(202);
    const asking = await settled(agent, `${id}-1`);
    expect(asking.status).toBe('asking');
    expect(asking.questions.length).toBeGreaterThan(0);
    expect((await daysOf(agent, id, '2023-06-01', '2023-06-01')).days[0].coverage).toEqual({});

    const plan: ColumnPlan = { ...HALF_HOURS, columns: [{ ...HALF_HOURS.columns[0], column: 'power (W)' }] };
    const answer = await agent.put(`/api/logs/${id}-1/plan`).send({ plan });
    expect(answer.status).toBe(202);
    expect(answer.body.log).toMatchObject({ id: `${id}-1`, questions: [], plan });
    expect((await settled(agent, `${id}-1`)).status).toBe('kept');
    const watts = Array.from({ length: 48 }, (_, i) =>
      Math.round(Math.max(0, 3000 * Math.sin(((i - 12) / 24) * Math.PI))),
    );
    const kwh = watts.reduce((sum, w) => sum + w / 2000, 0);
    expect((await daysOf(agent, id, '2023-06-01', '2023-06-01')).days[0].exportKwh).toBeCloseTo(kwh, 6);

    const second = await keep(agent, id, UNCLEAR('08'));
    expect(second.plan).toEqual(plan);
    const inspected = await agent
      .post(`/api/properties/${id}/logs/inspect`)
      .attach('file', Buffer.from(UNCLEAR('09')), 'a.csv');
    expect(inspected.body).toMatchObject({ plan, questions: [] });
  });
});

describe('PUT /api/logs/:id/plan', () => {
  it('when a kept log is corrected, then what it said is replaced, and it keeps its place', async () => {
    const { agent, id } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    const [first, second] = HALF_HOURS.columns;
    const plan = { ...HALF_HOURS, columns: [{ ...first, factor: 2 }, second] };
    const answer = await agent.put(`/api/logs/${id}-1/plan`).send({ plan });
    expect(answer.status).toBe(202);
    expect(answer.body.log).toMatchObject({ id: `${id}-1`, plan });
    expect(await settled(agent, `${id}-1`)).toMatchObject({ status: 'kept', plan });
    expect((await daysOf(agent, id, '2023-06-03', '2023-06-03')).days[0]).toMatchObject({
      exportKwh: 9.6,
      heaterKwh: 24,
    });
    expect(await stored(id)).toMatchObject({ logs: 1, refs: 7, blocks: 7, days: 7 });

    const back = await agent.put(`/api/logs/${id}-1/plan`).send({ plan: HALF_HOURS });
    expect(back.status).toBe(202);
    await settled(agent, `${id}-1`);
    expect((await daysOf(agent, id, '2023-06-03', '2023-06-03')).days[0]).toMatchObject({ exportKwh: 4.8 });
  });

  it('when the plan fits nothing, then 422, and the log stays as it was', async () => {
    const { agent, id } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    const bad = { ...HALF_HOURS, columns: [{ ...HALF_HOURS.columns[0], column: 'sun' }] };
    const answer = await agent.put(`/api/logs/${id}-1/plan`).send({ plan: bad });
    expect(answer.status).toBe(422);
    expect(await settled(agent, `${id}-1`)).toMatchObject({ status: 'kept', plan: HALF_HOURS });
    await agent
      .put(`/api/logs/${id}-1/plan`)
      .send({ plan: { columns: [] } })
      .expect(422);
    await agent.put(`/api/logs/${id}-1/plan`).send({}).expect(422);
  });

  it('when the log is withdrawn 409; unknown 404; a stranger’s 404; a reader’s 403', async () => {
    const { agent, id, owner } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    const body = { plan: HALF_HOURS };
    await (await t.person()).agent.put(`/api/logs/${id}-1/plan`).send(body).expect(404);
    await (await t.member(owner, 'reader')).agent.put(`/api/logs/${id}-1/plan`).send(body).expect(403);
    await agent.put(`/api/logs/${id}-9/plan`).send(body).expect(404);
    await agent.delete(`/api/logs/${id}-1`).expect(204);
    await agent.put(`/api/logs/${id}-1/plan`).send(body).expect(409);
  });
});

describe('GET /api/logs/:id', () => {
  it('when nothing can change any more, then it answers at once whatever the wait', async () => {
    const { agent, id } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    const started = performance.now();
    await agent.get(`/api/logs/${id}-1`).query({ wait: 60 }).expect(200);
    // Not a measure of speed: the wait would be sixty seconds.
    expect(performance.now() - started).toBeLessThan(20_000);
  });

  it('when the wait or the id is none, then 422 or 404', async () => {
    const { agent, id } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    await agent.get(`/api/logs/${id}-1`).query({ wait: 'long' }).expect(422);
    await agent.get(`/api/logs/${id}-1`).query({ wait: 61 }).expect(422);
    for (const wrong of [`${id}-2`, `${id}-0`, `${id}-1x`, `${id}-`, id, 'x-1', `${'a'.repeat(16)}-1`])
      await agent.get(`/api/logs/${wrong}`).expect(404);
    await t.nobody().get(`/api/logs/${id}-1`).expect(401);
    await (await t.person()).agent.get(`/api/logs/${id}-1`).expect(404);
  });

  it('when a landlord without consent looks, then no rows are shown, and originals and rejected rows are 403', async () => {
    const { id, owner } = await home();
    await keep(owner.agent, id, WEEK, HALF_HOURS);
    const landlord = await t.person('landlord');
    await t.grant(owner, id, landlord, 'landlord');
    const seen = await landlord.agent.get(`/api/logs/${id}-1`).expect(200);
    expect((seen.body as { log: Log }).log).toMatchObject({ status: 'kept', sample: null });
    for (const part of ['original', 'rejected.csv']) {
      const answer = await landlord.agent.get(`/api/logs/${id}-1/${part}`);
      expect([answer.status, answer.body.type]).toEqual([403, '/api/docs#problem-no-consent']);
    }
    await landlord.agent
      .get(`/api/properties/${id}/readings`)
      .query({ channel: 'export', from: '2023-06-01T00:00:00Z', to: '2023-06-02T00:00:00Z' })
      .expect(403);
    expect((await daysOf(landlord.agent, id, '2023-06-01', '2023-06-01')).days[0].exportKwh).toBe(4.8);
  });
});

describe('GET /api/properties/:id/logs', () => {
  it('when there are logs, then the newest first, withdrawn ones too, without plan or rows', async () => {
    const { agent, id } = await home();
    expect((await agent.get(`/api/properties/${id}/logs`).expect(200)).body).toEqual({ logs: [] });
    await keep(agent, id, WEEK, HALF_HOURS);
    await keep(agent, id, WEEK.replaceAll('2023-06', '2023-07'), HALF_HOURS, 'july.csv');
    await agent.delete(`/api/logs/${id}-1`).expect(204);
    const { body } = await agent.get(`/api/properties/${id}/logs`).expect(200);
    expect(body.logs.map((log: Log) => [log.id, log.fileName, log.status])).toEqual([
      [`${id}-2`, 'july.csv', 'kept'],
      [`${id}-1`, 'log.csv', 'withdrawn'],
    ]);
    expect(body.logs[0]).not.toHaveProperty('plan');
    expect(body.logs[0]).not.toHaveProperty('sample');
    await (await t.person()).agent.get(`/api/properties/${id}/logs`).expect(404);
  });
});

describe('GET /api/logs/:id/rejected.csv', () => {
  it('when rows were not taken, then each with line and reason, formulas made inert', async () => {
    const { agent, id } = await home();
    const rows = WEEK.trimEnd().split('\n');
    rows.splice(5, 0, '=cmd|x,1,2', 'yesterday,3,"4, or 5"');
    rows.splice(100, 0, '2023-06-02T30:00:00Z,1,2');
    const log = await keep(agent, id, rows.join('\n'), HALF_HOURS);
    expect(log.rows).toEqual({ read: 339, accepted: 336, rejected: 3, unchanged: 0 });
    expect(log.problems.reduce((sum, { count }) => sum + count, 0)).toBe(3);
    const answer = await agent.get(`/api/logs/${log.id}/rejected.csv`).expect(200);
    expect(answer.headers).toMatchObject({
      'content-type': 'text/csv; charset=utf-8',
      'content-disposition': 'attachment; filename=log-rejected.csv',
      'x-content-type-options': 'nosniff',
    });
    const lines = answer.text.trimEnd().split('\r\n');
    expect(lines[0]).toBe('line,column,reason,text');
    expect(lines.slice(1).map((line) => line.split(',')[0])).toEqual(['6', '7', '101']);
    expect(lines[1]).toContain(`"'=cmd|x,1,2"`);
    expect(lines[2]).toContain('"yesterday,3,""4, or 5"""');
  });

  it('when all rows were taken, or none was read yet, then only the heading', async () => {
    const { agent, id } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    const answer = await agent.get(`/api/logs/${id}-1/rejected.csv`).expect(200);
    expect(answer.text).toBe('line,column,reason,text\r\n');
  });

  it('when every row of a long unordered file is rejected or not, then all rejected ones come', async () => {
    const { agent, id } = await home();
    const rows = halfHours('2020-01-01T00:00:00Z', 20_000).trimEnd().split('\n');
    const shuffled = [rows[0], ...rows.slice(10_001), ...rows.slice(1, 10_001)];
    const broken = shuffled.map((row, i) => (i > 0 && i % 2 === 0 ? row.replace('Z,', '?,') : row));
    const log = await keep(agent, id, broken.join('\n'), HALF_HOURS);
    expect(log.rows).toEqual({ read: 20_000, accepted: 10_000, rejected: 10_000, unchanged: 0 });
    const answer = await agent.get(`/api/logs/${id}-1/rejected.csv`).expect(200);
    const numbers = answer.text
      .trimEnd()
      .split('\r\n')
      .slice(1)
      .map((line) => Number(line.split(',')[0]));
    expect(numbers).toEqual(Array.from({ length: 10_000 }, (_, i) => 2 * i + 3));
  });
});

describe('GET /api/logs/:id/original', () => {
  it('when it is asked for, then byte for byte, as an inert download', async () => {
    const { agent, id } = await home();
    const file = Buffer.concat([
      Buffer.from('\ufeff'),
      Buffer.from(WEEK.replaceAll('\n', '\r\n')),
      Buffer.from([0xe9, 0x0a]),
    ]);
    await send(agent, id, file, HALF_HOURS, 'Zähler.csv');
    const answer = await agent.get(`/api/logs/${id}-1/original`).buffer(true).parse(binary).expect(200);
    expect(bytes(answer.body as Buffer)).toBe(bytes(file));
    expect(answer.headers).toMatchObject({
      'content-type': 'application/octet-stream',
      'content-length': String(file.length),
      'content-disposition': `attachment; filename="Z?hler.csv"; filename*=UTF-8''Z%C3%A4hler.csv`,
      'x-content-type-options': 'nosniff',
      'cache-control': 'no-store',
    });
    await (await t.person()).agent.get(`/api/logs/${id}-1/original`).expect(404);
    await t.nobody().get(`/api/logs/${id}-1/original`).expect(401);
  });
});

describe('DELETE /api/logs/:id', () => {
  it('when a log is withdrawn, then all is as if it had never come; again 204; sent again it comes back', async () => {
    const { agent, id } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    const before = await daysOf(agent, id, '2023-05-28', '2023-06-12');
    const blocks = await stored(id);
    const other = halfHours('2023-06-05T12:00:00Z', 5 * 48, () => [900, 0]);
    await keep(agent, id, other, HALF_HOURS);
    const between = await daysOf(agent, id, '2023-05-28', '2023-06-12');
    expect(between.days).not.toEqual(before.days);
    await agent.delete(`/api/logs/${id}-2`).expect(204);
    await agent.delete(`/api/logs/${id}-2`).expect(204);
    expect(await daysOf(agent, id, '2023-05-28', '2023-06-12')).toEqual(before);
    expect(await stored(id)).toMatchObject({ refs: blocks.refs, blocks: blocks.blocks, days: blocks.days });
    expect((await settled(agent, `${id}-2`)).status).toBe('withdrawn');

    const again = await send(agent, id, other, HALF_HOURS);
    expect([again.status, again.body.same, again.body.log.id]).toEqual([200, true, `${id}-2`]);
    expect((await settled(agent, `${id}-2`)).status).toBe('kept');
    expect(await daysOf(agent, id, '2023-05-28', '2023-06-12')).toEqual(between);

    await agent.delete(`/api/logs/${id}-1`).expect(204);
    await agent.delete(`/api/logs/${id}-2`).expect(204);
    expect(await stored(id)).toMatchObject({ refs: 0, blocks: 0, days: 0, logs: 2 });
    const property = await agent.get(`/api/properties/${id}`);
    expect(property.body).toMatchObject({ firstDay: null, lastDay: null });
  });

  it('when nobody, a stranger or a reader tries, then 401, 404, 403, and it stays', async () => {
    const { agent, id, owner } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    await t.nobody().delete(`/api/logs/${id}-1`).expect(401);
    await (await t.person()).agent.delete(`/api/logs/${id}-1`).expect(404);
    await (await t.member(owner, 'reader')).agent.delete(`/api/logs/${id}-1`).expect(403);
    await agent.delete(`/api/logs/${id}-7`).expect(404);
    expect((await settled(agent, `${id}-1`)).status).toBe('kept');
  });
});

/** supertest gives bytes only if it is told how. */
const binary: Parameters<Test['parse']>[0] = (res: Response, done: (error: Error | null, body: Buffer) => void) => {
  const parts: Buffer[] = [];
  res.on('data', (part: Buffer) => parts.push(part));
  res.on('end', () => done(null, Buffer.concat(parts)));
};
