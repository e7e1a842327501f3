import { inject, provide } from 'vue';
import type { InjectionKey, Ref } from 'vue';
import type { Property } from '../../shared/api/property.ts';

/** The property whose pages are open. */
export interface CurrentProperty {
  property: Readonly<Ref<Property>>;
  /** Fetches it again after a change, without emptying the page. */
  reload: () => Promise<void>;
}

const KEY: InjectionKey<CurrentProperty> = Symbol('property');

export function provideProperty(current: CurrentProperty): void {
  provide(KEY, current);
}

/** @throws Error outside of a property’s pages */
export function useProperty(): CurrentProperty {
  const current = inject(KEY);
  if (!current) throw new Error('useProperty needs a page beneath views/PropertyShell.vue');
  return current;
}
