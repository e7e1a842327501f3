import { createPinia, setActivePinia } from 'pinia';
import { createMemoryHistory } from 'vue-router';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { api } from '../../../src/api/client.ts';
import { makeRouter, routes } from '../../../src/router/index.ts';

const known = { user: { id: '1', email: 'a@example.test', name: 'A' } };
const answer = (status: number, body: object) =>
  vi.stubGlobal('fetch', () => Promise.resolve(Response.json(body, { status })));

beforeEach(() => setActivePinia(createPinia()));
afterEach(() => vi.unstubAllGlobals());

// The pages are fetched when they are gone to; compiling them takes a while.
describe('the way to a page', { timeout: 30_000 }, () => {
  it('when nobody is signed in then it leads to the sign-in page with the way back', async () => {
    answer(401, { title: 'Not signed in', status: 401 });
    const router = makeRouter(createMemoryHistory());
    await router.push('/account');
    expect(router.currentRoute.value).toMatchObject({ name: 'sign-in', query: { to: '/account' } });
  });
  it('when somebody is signed in then it leads there', async () => {
    answer(200, known);
    const router = makeRouter(createMemoryHistory());
    await router.push('/properties');
    expect(router.currentRoute.value.name).toBe('properties');
    expect(document.title).toBe('Properties · Coppernoon');
  });
  it('when the server is away then the page opens, to say so itself', async () => {
    vi.stubGlobal('fetch', () => Promise.reject(new TypeError('no network')));
    const router = makeRouter(createMemoryHistory());
    await router.push('/properties');
    expect(router.currentRoute.value.name).toBe('properties');
  });
  it('when the session ends in mid-work then the sign-in page keeps the way back', async () => {
    answer(200, known);
    const router = makeRouter(createMemoryHistory());
    await router.push('/account');
    answer(401, { title: 'Not signed in', status: 401 });
    await api.get('/api/properties').catch(() => undefined);
    await vi.waitFor(() => expect(router.currentRoute.value.name).toBe('sign-in'), 20_000);
    expect(router.currentRoute.value.query).toEqual({ to: '/account' });
  });
  it('every page has a title of its own, and only two are open to strangers', () => {
    const all = routes.flatMap((route) => route.children ?? [route]);
    expect(all.every((route) => route.meta?.title)).toBe(true);
    expect(all.filter((route) => route.meta?.open).map((route) => route.name)).toEqual(['sign-in', 'not-found']);
  });
});
