import { effectScope, nextTick, ref } from 'vue';
import type { EffectScope } from 'vue';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { ApiProblem } from '../../../../src/api/client.ts';
import { useLoad } from '../../../../src/composables/useLoad.ts';

const settle = (): Promise<void> => new Promise((done) => setTimeout(done, 0));

/** A fetcher whose answers the test gives when it likes. */
function controlled() {
  const calls: { key: string; signal: AbortSignal; answer: (text: string) => void; fail: (error: unknown) => void }[] =
    [];
  const fetcher = (key: string, signal: AbortSignal) =>
    new Promise<string>((answer, fail) => calls.push({ key, signal, answer, fail }));
  return { calls, fetcher };
}

/** The page that the loading belongs to. */
let page: EffectScope;
beforeEach(() => (page = effectScope()));
afterEach(() => page.stop());
const within = <T>(make: () => T): T => page.run(make)!;

describe('useLoad', () => {
  it('is idle without a key, loading, then done', async () => {
    const key = ref<string | null>(null);
    const { calls, fetcher } = controlled();
    const { load } = within(() => useLoad(key, fetcher));
    expect(load.value).toEqual({ state: 'idle' });
    key.value = 'a';
    await nextTick();
    expect(load.value).toEqual({ state: 'loading' });
    calls[0].answer('A');
    await settle();
    expect(load.value).toEqual({ state: 'done', data: 'A' });
  });
  it('an answer that comes late never overwrites a newer one', async () => {
    const key = ref('a');
    const { calls, fetcher } = controlled();
    const { load } = within(() => useLoad(key, fetcher));
    key.value = 'b';
    await nextTick();
    expect(calls[0].signal.aborted).toBe(true);
    calls[1].answer('B');
    await settle();
    calls[0].answer('A');
    await settle();
    expect(load.value).toEqual({ state: 'done', data: 'B' });
  });
  it('fails with a problem that can be shown, and can be tried again', async () => {
    const { calls, fetcher } = controlled();
    const { load, reload } = within(() => useLoad('a', fetcher));
    calls[0].fail(new ApiProblem({ status: 503, title: 'Away' }));
    await settle();
    expect(load.value).toMatchObject({ state: 'failed', problem: { status: 503, title: 'Away' } });
    void reload();
    expect(load.value.state).toBe('loading');
    calls[1].answer('A');
    await settle();
    expect(load.value.state).toBe('done');
  });
  it('fetching again quietly keeps what is shown', async () => {
    const { calls, fetcher } = controlled();
    const { load, reload } = within(() => useLoad('a', fetcher));
    calls[0].answer('A');
    await settle();
    void reload(true);
    expect(load.value).toEqual({ state: 'done', data: 'A' });
    calls[1].answer('B');
    await settle();
    expect(load.value).toEqual({ state: 'done', data: 'B' });
  });
  it('stops the call when its page goes', () => {
    const { calls, fetcher } = controlled();
    within(() => useLoad('a', fetcher));
    page.stop();
    expect(calls[0].signal.aborted).toBe(true);
  });
});
