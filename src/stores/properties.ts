import { computed, ref } from 'vue';
import { defineStore } from 'pinia';
import type { PropertySummary } from '../../shared/api/property.ts';
import { listProperties } from '../api/properties.ts';

/** The properties one may see, for the list and the switcher. */
export const useProperties = defineStore('properties', () => {
  const list = ref<PropertySummary[] | null>(null);

  /** Asks the server for the list. @throws ApiProblem */
  async function refresh(signal?: AbortSignal): Promise<PropertySummary[]> {
    list.value = (await listProperties(signal)).properties;
    return list.value;
  }

  function forget(): void {
    list.value = null;
  }

  return { list: computed(() => list.value), refresh, forget };
});
