import supertest from 'supertest';
import { describe, expect, it } from 'vitest';
import { createApp } from '../../server/app.ts';
import { ABSOLUTE_MS, IDLE_MS } from '../../server/http/session.ts';
import { PASSWORD, useApp } from '../support/app.ts';

let clock = Date.parse('2026-06-01T12:00:00Z');
const t = useApp({ now: () => new Date(clock) });

const cookies = (headers: Record<string, unknown>) => (headers['set-cookie'] ?? []) as string[];

describe('POST /api/session', () => {
  it('when address and password belong together, then it answers with the person and a strict cookie', async () => {
    const { id, email, name } = await t.person();
    const answer = await t.nobody().post('/api/session').send({ email, password: PASSWORD });
    expect(answer.status).toBe(200);
    expect(answer.body).toEqual({ user: { id, email, name } });
    const session = cookies(answer.headers).find((cookie) => cookie.startsWith('coppernoon-session='));
    expect(session).toMatch(/; HttpOnly/);
    expect(session).toMatch(/; SameSite=Lax/);
    expect(session).toMatch(/; Path=\/;/);
    expect(session).not.toMatch(/Secure/);
  });

  it('when the address is written in capitals, then it is the same person', async () => {
    const { id, email } = await t.person();
    const answer = await t
      .nobody()
      .post('/api/session')
      .send({ email: ` ${email.toUpperCase()}`, password: PASSWORD });
    expect(answer.body.user?.id).toBe(id);
  });

  it('when the password is wrong or the address unknown, then both are answered alike and no session begins', async () => {
    const { email } = await t.person();
    const wrong = await t.nobody().post('/api/session').send({ email, password: 'not the password' });
    const unknown = await t.nobody().post('/api/session').send({ email: 'who@example.test', password: PASSWORD });
    expect(wrong.status).toBe(401);
    const { requestId: first, ...wrongBody } = wrong.body;
    const { requestId: second, ...unknownBody } = unknown.body;
    expect(unknownBody).toEqual(wrongBody);
    expect(wrongBody).toEqual({
      type: '/api/docs#problem-wrong-credentials',
      title: 'Not signed in',
      status: 401,
      detail: 'The address and the password do not belong together. Check both; a password manager helps.',
    });
    expect(first).not.toBe(second);
    expect(wrong.headers['content-type']).toMatch(/^application\/problem\+json/);
    expect(cookies(wrong.headers)).toEqual([]);
  });

  it('when someone signs in over an old session, then the session has a new id and the old one is gone', async () => {
    const { email, agent } = await t.person();
    const before = await t.db.query<{ sid: string }>('select sid from sessions');
    const again = await agent.post('/api/session').send({ email, password: PASSWORD }).expect(200);
    const sid = cookies(again.headers).find((cookie) => cookie.startsWith('coppernoon-session='));
    expect(sid).toBeDefined();
    const after = (await t.db.query<{ sid: string }>('select sid from sessions')).map((row) => row.sid);
    expect(before.filter((row) => after.includes(row.sid))).toHaveLength(before.length - 1);
    expect(after).toHaveLength(before.length);
  });

  it.each([
    ['no body', undefined, 'email'],
    ['no password', { email: 'a@example.test' }, 'password'],
    ['a number for a password', { email: 'a@example.test', password: 5 }, 'password'],
    ['a field that does not exist', { email: 'a@example.test', password: 'x', remember: true }, 'remember'],
    ['a NUL in the address', { email: 'a\0@example.test', password: 'x' }, 'email'],
  ])('when the body has %s, then 422 names the field', async (_what, body, path) => {
    const answer = await t.nobody().post('/api/session').send(body);
    expect(answer.status).toBe(422);
    expect(answer.body.type).toBe('/api/docs#problem-bad-fields');
    expect(answer.body.errors.map((error: { path: string }) => error.path)).toContain(path);
  });

  it('when the body is no JSON, then 400; when it is a form, then 415; when it is huge, then 413', async () => {
    const post = () => t.nobody().post('/api/session');
    const broken = await post().set('Content-Type', 'application/json').send('{"email":');
    const form = await post().type('form').send({ email: 'a@example.test', password: 'x' });
    const huge = await post().send({ email: 'a@example.test', password: 'x'.repeat(300_000) });
    const charset = await post().set('Content-Type', 'application/json; charset=klingon').send('{}');
    expect([broken.status, form.status, huge.status, charset.status]).toEqual([400, 415, 413, 415]);
    for (const { headers, body } of [broken, form, huge, charset]) {
      expect(headers['content-type']).toMatch(/^application\/problem\+json/);
      expect(body.status).toBeGreaterThan(0);
    }
  });

  it('when failures pile up, then 429 with Retry-After; the owner’s known device still signs in', async () => {
    const { email, agent } = await t.person();
    const attempt = (password: string) => t.nobody().post('/api/session').send({ email, password });
    for (let i = 0; i < 10; i++) expect((await attempt('not the password')).status).toBe(401);
    const limited = await attempt('not the password');
    expect(limited.status).toBe(429);
    expect(limited.body.type).toBe('/api/docs#problem-too-many');
    expect(Number(limited.headers['retry-after'])).toBeGreaterThan(0);
    expect((await attempt(PASSWORD)).status).toBe(429);
    expect((await agent.post('/api/session').send({ email, password: PASSWORD })).status).toBe(200);
    expect((await agent.get('/api/session')).status).toBe(200);
  });

  it('when failures are spread over two processes, then the limit holds for both together', async () => {
    const { email } = await t.person();
    const other = supertest(await createApp(t.deps));
    const body = { email, password: 'not the password' };
    for (let i = 0; i < 5; i++) {
      await t.nobody().post('/api/session').send(body).expect(401);
      await other.post('/api/session').send(body).expect(401);
    }
    await other.post('/api/session').send(body).expect(429);
    await t.nobody().post('/api/session').send(body).expect(429);
  });

  it('when someone signs in often and rightly, then no limit is reached', async () => {
    const { email } = await t.person();
    for (let i = 0; i < 15; i++) await t.nobody().post('/api/session').send({ email, password: PASSWORD }).expect(200);
  });

  it('when the device mark is another person’s, then it does not help a stranger', async () => {
    const { email } = await t.person();
    const other = await t.person();
    for (let i = 0; i < 10; i++)
      await other.agent.post('/api/session').send({ email, password: 'not the password' }).expect(401);
    await other.agent.post('/api/session').send({ email, password: 'not the password' }).expect(429);
  });
});

describe('GET /api/session', () => {
  it('when someone is signed in, then it answers with the person', async () => {
    const { agent, id, email, name } = await t.person();
    const answer = await agent.get('/api/session');
    expect(answer.status).toBe(200);
    expect(answer.body).toEqual({ user: { id, email, name } });
    expect(answer.headers['cache-control']).toBe('no-store');
  });

  it('when nobody is signed in, or the cookie is forged, then 401', async () => {
    await t.nobody().get('/api/session').expect(401);
    await t.nobody().get('/api/session').set('Cookie', 'coppernoon-session=s%3Aforged.signature').expect(401);
  });

  it('when a session was idle too long, then it has ended', async () => {
    const { agent } = await t.person();
    clock += IDLE_MS - 1000;
    await agent.get('/api/session').expect(200);
    clock += IDLE_MS - 1000;
    await agent.get('/api/session').expect(200);
    clock += IDLE_MS + 1000;
    await agent.get('/api/session').expect(401);
  });

  it('when a session is used all the time, then it still ends at its absolute limit', async () => {
    const { agent } = await t.person();
    const started = clock;
    while (clock + IDLE_MS / 2 < started + ABSOLUTE_MS) {
      clock += IDLE_MS / 2;
      await agent.get('/api/session').expect(200);
    }
    clock = started + ABSOLUTE_MS + 1000;
    await agent.get('/api/session').expect(401);
  });
});

describe('DELETE /api/session', () => {
  it('when someone signs out, then 204 and the cookie is worth nothing, also for who copied it', async () => {
    const { email } = await t.person();
    const signedIn = await t.nobody().post('/api/session').send({ email, password: PASSWORD });
    const cookie = cookies(signedIn.headers)
      .map((line) => line.split(';')[0])
      .join('; ');
    const call = (method: 'get' | 'delete') => t.nobody()[method]('/api/session').set('Cookie', cookie);
    await call('get').expect(200);
    const out = await call('delete');
    expect(out.status).toBe(204);
    expect(out.text).toBe('');
    await call('get').expect(401);
    await call('delete').expect(401);
  });
});

describe('the log', () => {
  it('when people sign in and fail to, then neither addresses nor passwords nor cookies are written', async () => {
    const { email, agent } = await t.person();
    await t.nobody().post('/api/session').send({ email, password: 'a secret that is wrong' });
    await agent.get('/api/properties?email=' + email);
    const written = t.log.join('\n');
    expect(t.log.length).toBeGreaterThan(3);
    expect(written).not.toContain('@example.test');
    expect(written).not.toContain('a secret that is wrong');
    expect(written).not.toContain(PASSWORD);
    expect(written).not.toContain('coppernoon-session');
    expect(written).not.toContain('127.0.0.1');
    for (const line of t.log) expect(JSON.parse(line)).toHaveProperty('time');
  });
});
