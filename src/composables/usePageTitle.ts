import { toValue, watchEffect } from 'vue';
import type { MaybeRefOrGetter } from 'vue';

export const APP_NAME = 'Coppernoon';

/** Sets the window’s title for as long as the page is open. */
export function usePageTitle(title: MaybeRefOrGetter<string | null | undefined>): void {
  watchEffect(() => {
    const text = toValue(title);
    document.title = text ? `${text} · ${APP_NAME}` : APP_NAME;
  });
}
