import { beforeAll, describe, expect, it } from 'vitest';
import type { Agent } from 'supertest';
import { useApp } from '../support/app.ts';
import type { TestPerson } from '../support/app.ts';

const t = useApp();

interface Call {
  method: 'get' | 'post' | 'put' | 'patch' | 'delete';
  path: string;
  policy: unknown;
}

/** Every route that the API describes of itself. A new route is in the matrix without a line here. */
let calls: Call[] = [];
let propertyId = '';
let owner: TestPerson;
let stranger: TestPerson;

beforeAll(async () => {
  const { body } = await t.nobody().get('/api/openapi.json').expect(200);
  const paths = body.paths as Record<string, Record<string, { 'x-policy'?: unknown }>>;
  calls = Object.entries(paths).flatMap(([path, methods]) =>
    Object.entries(methods).map(([method, operation]) => ({
      method: method as Call['method'],
      path,
      policy: operation['x-policy'],
    })),
  );
  owner = await t.person();
  stranger = await t.person();
  propertyId = (await t.property(owner)).id;
});

const isObject = (policy: unknown): policy is Record<string, string> => typeof policy === 'object' && policy !== null;

/** The address of something that exists and is the owner's. */
function addressOf({ path, policy }: Call): string {
  const id = isObject(policy) && 'log' in policy ? `${propertyId}-1` : propertyId;
  return path.replace('{id}', id).replace(/\{\w+\}/g, 'x');
}

const send = (agent: Agent, call: Call) => agent[call.method](addressOf(call));

describe('the matrix of every route', () => {
  it('when a route is described, then it declares one of the known policies', () => {
    expect(calls.length).toBeGreaterThan(20);
    const actions = ['see', 'days', 'traces', 'upload', 'edit', 'grants', 'consent'];
    for (const { method, path, policy } of calls) {
      const known =
        policy === 'anyone' ||
        policy === 'signedIn' ||
        (isObject(policy) &&
          Object.keys(policy).length === 1 &&
          (('property' in policy && actions.includes(policy['property'] ?? '')) ||
            ('log' in policy && actions.includes(policy['log'] ?? ''))));
      expect(known, `${method} ${path}`).toBe(true);
    }
  });

  it('when a path names a property or a log, then its policy is about that property', () => {
    for (const { method, path, policy } of calls) {
      if (path.startsWith('/api/properties/{id}')) expect(policy, `${method} ${path}`).toHaveProperty('property');
      if (path.startsWith('/api/logs/{id}')) expect(policy, `${method} ${path}`).toHaveProperty('log');
    }
  });

  it('when a route is open to anyone, then it is one of those few', () => {
    const open = calls.filter(({ policy }) => policy === 'anyone').map(({ method, path }) => `${method} ${path}`);
    expect(open.sort()).toEqual([
      'get /api/docs',
      'get /api/docs/fonts/{name}',
      'get /api/docs/style.css',
      'get /api/health',
      'get /api/health/live',
      'get /api/openapi.json',
      'post /api/session',
    ]);
  });

  it('when nobody is signed in, then every other route answers 401 and tells nothing', async () => {
    for (const call of calls.filter(({ policy }) => policy !== 'anyone')) {
      const answer = await send(t.nobody(), call);
      expect([answer.status, answer.body.type], `${call.method} ${call.path}`).toEqual([
        401,
        '/api/docs#problem-no-session',
      ]);
      expect(JSON.stringify(answer.body)).not.toContain(propertyId);
    }
  });

  it('when another household asks, then everything of the property answers as if it were not there', async () => {
    const about = calls.filter(({ policy }) => isObject(policy));
    expect(about.length).toBeGreaterThan(5);
    for (const call of about) {
      const answer = await send(stranger.agent, call);
      expect([answer.status, answer.body.type], `${call.method} ${call.path}`).toEqual([
        404,
        '/api/docs#problem-not-found',
      ]);
      const absent = await stranger.agent[call.method](addressOf(call).replace(propertyId, 'a'.repeat(16)));
      expect({ ...answer.body, requestId: '' }).toEqual({ ...absent.body, requestId: '' });
    }
    const grants = await owner.agent.get(`/api/properties/${propertyId}/grants`);
    expect(grants.body.grants).toHaveLength(1);
  });

  it('when a member only reads, then every act answers 403 and names what is missing', async () => {
    const reader = await t.member(owner, 'reader');
    const acts = ['upload', 'edit', 'grants', 'consent'];
    const about = calls.filter(({ policy }) => isObject(policy) && acts.includes(Object.values(policy)[0] ?? ''));
    for (const call of about) {
      const answer = await send(reader.agent, call);
      expect([answer.status, answer.body.type], `${call.method} ${call.path}`).toEqual([
        403,
        '/api/docs#problem-forbidden',
      ]);
      expect(answer.body.detail.length).toBeGreaterThan(20);
    }
  });

  it('when a landlord has no consent, then everything finer than a day answers 403 and names the consent', async () => {
    const landlord = await t.person('landlord');
    await t.grant(owner, propertyId, landlord, 'landlord');
    const finer = calls.filter(({ policy }) => isObject(policy) && Object.values(policy)[0] === 'traces');
    for (const call of finer) {
      const answer = await send(landlord.agent, call);
      expect([answer.status, answer.body.type], `${call.method} ${call.path}`).toEqual([
        403,
        '/api/docs#problem-no-consent',
      ]);
    }
  });

  it('when an installer’s grant was withdrawn, then everything of the property is gone for them', async () => {
    const installer = await t.person('firm');
    const grant = await t.grant(owner, propertyId, installer, 'installer');
    await installer.agent.get(`/api/properties/${propertyId}`).expect(200);
    await owner.agent.delete(`/api/properties/${propertyId}/grants/${grant}`).expect(204);
    for (const call of calls.filter(({ policy }) => isObject(policy)))
      expect((await send(installer.agent, call)).status, `${call.method} ${call.path}`).toBe(404);
  });
});
