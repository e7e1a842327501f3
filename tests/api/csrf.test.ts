import { describe, expect, it } from 'vitest';
import { PASSWORD, useApp } from '../support/app.ts';

const HOME = 'https://hotwater.example.test';

describe('the origin of an unsafe call with a cookie', () => {
  describe('when no address is configured', () => {
    const t = useApp();
    it.each([
      ['the address served', { Host: 'served.example.test:8080', Origin: 'http://served.example.test:8080' }, 201],
      ['another site', { Host: 'served.example.test', Origin: 'http://evil.example.test' }, 403],
      ['another port', { Host: 'served.example.test:8080', Origin: 'http://served.example.test:8081' }, 403],
      ['another scheme', { Host: 'served.example.test', Origin: 'https://served.example.test' }, 403],
      ['an opaque page', { Host: 'served.example.test', Origin: 'null' }, 403],
      [
        'another site that claims to be the same',
        { Origin: 'http://evil.example.test', 'Sec-Fetch-Site': 'same-origin' },
        403,
      ],
      ['no Origin, same-origin', { 'Sec-Fetch-Site': 'same-origin' }, 201],
      ['no Origin, typed by the person', { 'Sec-Fetch-Site': 'none' }, 201],
      ['no Origin, a sibling site', { 'Sec-Fetch-Site': 'same-site' }, 403],
      ['no Origin, another site', { 'Sec-Fetch-Site': 'cross-site' }, 403],
      ['no browser at all', {}, 201],
      [
        'a host claimed by a proxy header nobody trusts',
        { 'X-Forwarded-Host': 'evil.example.test', Origin: 'http://evil.example.test' },
        403,
      ],
    ])('and it is sent by %s, then %s answers %i', async (_who, headers, status) => {
      const { agent } = await t.person();
      const answer = await agent.post('/api/tokens').set(headers).send({ name: 'x' });
      expect(answer.status).toBe(status);
      if (status === 403) expect(answer.body.type).toBe('/api/docs#problem-foreign-origin');
      expect((await agent.get('/api/tokens')).body.tokens).toHaveLength(status === 201 ? 1 : 0);
    });

    it('and a foreign page signs someone in, then 403', async () => {
      const { email } = await t.person();
      const answer = await t
        .nobody()
        .post('/api/session')
        .set('Origin', 'http://evil.example.test')
        .send({ email, password: PASSWORD });
      expect(answer.status).toBe(403);
      expect(answer.headers['set-cookie']).toBeUndefined();
    });

    it('and a foreign page only reads, then nothing is refused here: it cannot see the answer', async () => {
      const { agent } = await t.person();
      const answer = await agent.get('/api/session').set('Origin', 'http://evil.example.test').expect(200);
      expect(answer.headers['access-control-allow-origin']).toBeUndefined();
    });

    it('and nobody is signed in, then 401 comes before the origin', async () => {
      await t.nobody().post('/api/tokens').set('Origin', 'http://evil.example.test').send({ name: 'x' }).expect(401);
    });
  });

  describe('when an https address is configured', () => {
    const t = useApp({ baseUrl: HOME });
    const cookieOf = async () => {
      const { email } = await t.person().catch(() => ({ email: '' }));
      const answer = await t
        .nobody()
        .post('/api/session')
        .set('Origin', HOME)
        .send({ email, password: PASSWORD })
        .expect(200);
      return (answer.headers['set-cookie'] ?? []) as unknown as string[];
    };

    it('then cookies are __Host- and Secure, without a Domain, and HSTS is sent', async () => {
      const cookies = await cookieOf();
      expect(cookies.length).toBe(2);
      for (const cookie of cookies) {
        expect(cookie).toMatch(/^__Host-coppernoon-(session|device)=/);
        expect(cookie).toMatch(/; Secure/);
        expect(cookie).toMatch(/; HttpOnly/);
        expect(cookie).toMatch(/; Path=\//);
        expect(cookie).not.toMatch(/; Domain/);
      }
      const { headers } = await t.nobody().get('/api/health');
      expect(headers['strict-transport-security']).toMatch(/max-age=31536000/);
    });

    it('then only that address is accepted, whatever Host says', async () => {
      const cookie = (await cookieOf()).map((line) => line.split(';')[0]).join('; ');
      const post = (headers: Record<string, string>) =>
        t.nobody().post('/api/tokens').set('Cookie', cookie).set(headers).send({ name: 'x' });
      expect((await post({ Origin: HOME })).status).toBe(201);
      expect((await post({ Host: 'served.example.test', Origin: 'http://served.example.test' })).status).toBe(403);
      expect((await post({ Origin: 'http://hotwater.example.test' })).status).toBe(403);
    });
  });
});
