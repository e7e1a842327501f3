import type {
  DatedSystem,
  DatedTariff,
  NewProperty,
  Property,
  PropertyList,
  PropertyPatch,
} from '../../shared/api/property.ts';
import { api } from './client.ts';

const at = (id: string): string => `/api/properties/${encodeURIComponent(id)}`;

export const listProperties = (signal?: AbortSignal) => api.get<PropertyList>('/api/properties', { signal });
export const readProperty = (id: string, signal?: AbortSignal) => api.get<Property>(at(id), { signal });
export const addProperty = (body: NewProperty) => api.post<Property>('/api/properties', body);
export const changeProperty = (id: string, patch: PropertyPatch) => api.patch<Property>(at(id), patch);
export const deleteProperty = (id: string) => api.delete(at(id));
export const putSystem = (id: string, system: DatedSystem) => api.put<Property>(`${at(id)}/system`, system);
export const putTariff = (id: string, tariff: DatedTariff) => api.put<Property>(`${at(id)}/tariffs`, tariff);
