import { onScopeDispose, shallowReadonly, shallowRef, toValue, watch } from 'vue';
import type { MaybeRefOrGetter, ShallowRef } from 'vue';
import { asProblem, isAbort } from '../api/client.ts';
import type { ApiProblem } from '../api/client.ts';

/** What is known of something that is fetched, as one value; a template has a branch for each state. */
export type Load<T> =
  { state: 'idle' } | { state: 'loading' } | { state: 'failed'; problem: ApiProblem } | { state: 'done'; data: T };

export interface Loading<T> {
  load: Readonly<ShallowRef<Load<T>>>;
  /** Fetches again; `quietly` keeps what is shown until the answer is there. */
  reload: (quietly?: boolean) => Promise<void>;
}

/**
 * Fetches whenever the key changes; an earlier call under way is aborted, and all on disposal.
 * @param key what to fetch; null or undefined: nothing yet
 * @param fetcher given the key and a signal that aborts
 */
export function useLoad<K, T>(
  key: MaybeRefOrGetter<K | null | undefined>,
  fetcher: (key: K, signal: AbortSignal) => Promise<T>,
): Loading<T> {
  const load = shallowRef<Load<T>>({ state: 'idle' });
  let running: AbortController | null = null;

  async function reload(quietly = false): Promise<void> {
    running?.abort();
    running = null;
    const now = toValue(key);
    if (now == null) {
      load.value = { state: 'idle' };
      return;
    }
    const mine = (running = new AbortController());
    if (!quietly) load.value = { state: 'loading' };
    try {
      const data = await fetcher(now, mine.signal);
      if (running === mine) load.value = { state: 'done', data };
    } catch (error) {
      if (running === mine && !isAbort(error)) load.value = { state: 'failed', problem: asProblem(error) };
    }
  }

  watch(
    () => JSON.stringify(toValue(key) ?? null),
    () => void reload(),
    { immediate: true },
  );
  onScopeDispose(() => running?.abort());
  return { load: shallowReadonly(load), reload };
}
