import { afterEach, describe, expect, it, vi } from 'vitest';
import { api, ApiProblem, apiUrl, onSignedOut } from '../../../../src/api/client.ts';

/** Stands in for the network: the next answer, or what is thrown. */
function answer(make: () => Response | Promise<Response>) {
  const fetched = vi.fn((_url: string, _init: RequestInit) => Promise.resolve().then(make));
  vi.stubGlobal('fetch', fetched);
  return fetched;
}
const failure = (promise: Promise<unknown>): Promise<ApiProblem> =>
  promise.then(
    () => {
      throw new Error('it should have failed');
    },
    (error: unknown) => error as ApiProblem,
  );

afterEach(() => {
  vi.unstubAllGlobals();
  onSignedOut(() => {});
});

describe('the client', () => {
  it('gives the answer of a call that went well', async () => {
    const fetched = answer(() => Response.json({ properties: [] }));
    await expect(api.get('/api/properties')).resolves.toEqual({ properties: [] });
    expect(fetched.mock.calls[0][1]).toMatchObject({ method: 'GET', credentials: 'same-origin' });
  });
  it('sends a body as JSON, and none where there is none', async () => {
    const fetched = answer(() => new Response(null, { status: 204 }));
    await expect(api.delete('/api/logs/x')).resolves.toBeUndefined();
    expect(fetched.mock.calls[0][1].body).toBeUndefined();
    await api.put('/api/logs/x/plan', { plan: 1 });
    expect(fetched.mock.calls[1][1].body).toBe('{"plan":1}');
  });
  it('turns problem details into a typed error', async () => {
    const errors = [{ path: 'name', message: 'is missing' }];
    answer(() => Response.json({ type: 'x', title: 'Bad', status: 422, detail: 'Look', errors }, { status: 422 }));
    const problem = await failure(api.post('/api/properties', {}));
    expect(problem).toBeInstanceOf(ApiProblem);
    expect(problem).toMatchObject({ status: 422, title: 'Bad', detail: 'Look', errors });
  });
  it('says that the server was not reached when nothing answers', async () => {
    answer(() => Promise.reject(new TypeError('fetch failed')));
    expect(await failure(api.get('/api/x'))).toMatchObject({ status: 0, title: 'No answer from the server' });
  });
  it('says that an answer cannot be read when something else than JSON comes', async () => {
    answer(() => new Response('<html>', { status: 502 }));
    expect(await failure(api.get('/api/x'))).toMatchObject({ status: 502 });
    answer(() => new Response('<html>', { status: 200 }));
    expect((await failure(api.get('/api/x'))).title).toContain('cannot be read');
  });
  it('tells of a lost session, except where the call minds it itself', async () => {
    const lost = vi.fn();
    onSignedOut(lost);
    answer(() => Response.json({ title: 'Not signed in', status: 401 }, { status: 401 }));
    await failure(api.get('/api/session', { quiet: true }));
    expect(lost).not.toHaveBeenCalled();
    await failure(api.get('/api/properties'));
    expect(lost).toHaveBeenCalledOnce();
  });
  it('passes an abort on as an abort, not as a failure of the network', async () => {
    answer(() => Promise.reject(new DOMException('stopped', 'AbortError')));
    expect((await failure(api.get('/api/x'))).name).toBe('AbortError');
  });
  it('leaves out of the address what is not given', () => {
    expect(apiUrl('/api/x', { a: 1, b: null, c: undefined, d: 'é&' })).toBe('/api/x?a=1&d=%C3%A9%26');
    expect(apiUrl('/api/x')).toBe('/api/x');
  });
});
