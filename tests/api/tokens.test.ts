import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { PASSWORD, SMALL_HOME, useApp } from '../support/app.ts';

const t = useApp();

const make = async (agent: ReturnType<typeof t.nobody>, name = 'script') => {
  const answer = await agent.post('/api/tokens').send({ name }).expect(201);
  return answer.body as { id: string; token: string };
};
const bearer = (token: string) => ({ Authorization: `Bearer ${token}` });

describe('POST /api/tokens', () => {
  it('when a signed-in person asks, then the token is shown once and kept as a hash only', async () => {
    const { agent, id: personId } = await t.person();
    const answer = await agent.post('/api/tokens').send({ name: ' nightly upload ' });
    expect(answer.status).toBe(201);
    expect(Object.keys(answer.body).sort()).toEqual(['id', 'token']);
    // 43 characters of base64url hold 256 bits.
    expect(answer.body.token).toMatch(/^cn_[\w-]{43}$/);
    const rows = await t.db.query<Record<string, unknown>>('select * from tokens where person_id = $1', [personId]);
    expect(rows).toHaveLength(1);
    expect(rows[0]).toMatchObject({
      id: answer.body.id,
      name: 'nightly upload',
      hash: createHash('sha256').update(answer.body.token).digest(),
      last_used_at: null,
    });
    expect(JSON.stringify(rows)).not.toContain(answer.body.token);
  });

  it('when the name is missing or too long, then 422 and none is made', async () => {
    const { agent } = await t.person();
    for (const body of [{}, { name: '  ' }, { name: 'x'.repeat(101) }]) {
      const answer = await agent.post('/api/tokens').send(body);
      expect(answer.status).toBe(422);
      expect(answer.body.errors[0].path).toBe('name');
    }
    expect((await agent.get('/api/tokens')).body).toEqual({ tokens: [] });
  });

  it('when nobody is signed in, then 401', async () => {
    await t.nobody().post('/api/tokens').send({ name: 'x' }).expect(401);
  });
});

describe('GET /api/tokens', () => {
  it('when a person has tokens, then it lists theirs alone, with the last use and without secrets', async () => {
    const { agent } = await t.person();
    const other = await t.person();
    await make(other.agent);
    const first = await make(agent, 'first');
    const second = await make(agent, 'second');
    await t.nobody().get('/api/properties').set(bearer(second.token)).expect(200);
    const { body } = await agent.get('/api/tokens').expect(200);
    const instant = expect.stringMatching(/^\d{4}-\d\d-\d\dT[\d:.]+Z$/);
    expect(body).toEqual({
      tokens: [
        { id: first.id, name: 'first', createdAt: instant, lastUsedAt: null },
        { id: second.id, name: 'second', createdAt: instant, lastUsedAt: instant },
      ],
    });
  });
});

describe('a bearer token', () => {
  it('when it is sent, then it can do what its owner can', async () => {
    const { agent, id, email, name } = await t.person();
    const { token } = await make(agent);
    const who = await t.nobody().get('/api/session').set(bearer(token)).expect(200);
    expect(who.body).toEqual({ user: { id, email, name } });
    const added = await t.nobody().post('/api/properties').set(bearer(token)).send(SMALL_HOME).expect(201);
    await agent.get(`/api/properties/${added.body.id}`).expect(200);
    expect(who.headers['set-cookie']).toBeUndefined();
  });

  it('when it is wrong, then 401, also beside a good cookie', async () => {
    const { agent } = await t.person();
    const answer = await agent.get('/api/session').set(bearer('cn_wrong'));
    expect(answer.status).toBe(401);
    expect(answer.headers['www-authenticate']).toBe('Bearer');
    await agent.get('/api/session').expect(200);
  });

  it('when the request is of another site, then the token alone decides', async () => {
    const { agent } = await t.person();
    const { token } = await make(agent);
    const call = t.nobody().post('/api/tokens').set(bearer(token)).set('Origin', 'https://elsewhere.example.test');
    await call.send({ name: 'x' }).expect(201);
  });

  it('when it is sent to sign in, then that is refused with a reason', async () => {
    const { agent, email } = await t.person();
    const { token } = await make(agent);
    const answer = await t.nobody().post('/api/session').set(bearer(token)).send({ email, password: PASSWORD });
    expect(answer.status).toBe(400);
    expect(answer.body.detail).toContain('leave out Authorization');
  });
});

describe('DELETE /api/tokens/:id', () => {
  it('when its owner revokes it, then 204 and the next call with it is refused', async () => {
    const { agent } = await t.person();
    const { id, token } = await make(agent);
    await t.nobody().get('/api/session').set(bearer(token)).expect(200);
    await agent.delete(`/api/tokens/${id}`).expect(204);
    await t.nobody().get('/api/session').set(bearer(token)).expect(401);
    expect((await agent.get('/api/tokens')).body).toEqual({ tokens: [] });
    await agent.delete(`/api/tokens/${id}`).expect(404);
  });

  it('when it is another’s, then 404 and it goes on working', async () => {
    const owner = await t.person();
    const other = await t.person();
    const { id, token } = await make(owner.agent);
    await other.agent.delete(`/api/tokens/${id}`).expect(404);
    await t.nobody().get('/api/session').set(bearer(token)).expect(200);
  });
});
