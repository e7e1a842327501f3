import type { BoilerKinds } from '../../shared/api/property.ts';
import { api } from './client.ts';

export const listBoilerKinds = (signal?: AbortSignal) =>
  api.get<BoilerKinds>('/api/reference/boiler-kinds', { signal });
