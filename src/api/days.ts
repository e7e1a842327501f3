import type { CylinderAnswer, DaysAnswer, ReadingsAnswer } from '../../shared/api/day.ts';
import type { Channel } from '../../shared/units/channels.ts';
import { api } from './client.ts';

const at = (id: string): string => `/api/properties/${encodeURIComponent(id)}`;

/** Days from `from` to `to`, both civil dates included, 4,000 at most. */
export const readDays = (id: string, from: string, to: string, signal?: AbortSignal) =>
  api.get<DaysAnswer>(`${at(id)}/days`, { query: { from, to }, signal });

/** Readings of one channel between two instants in ms, `to` excluded. */
export const readReadings = (
  id: string,
  span: { channel: Channel; from: number; to: number; points: number },
  signal?: AbortSignal,
) =>
  api.get<ReadingsAnswer>(`${at(id)}/readings`, {
    query: {
      channel: span.channel,
      from: new Date(span.from).toISOString(),
      to: new Date(span.to).toISOString(),
      points: span.points,
    },
    signal,
  });

export const readCylinder = (id: string, signal?: AbortSignal) =>
  api.get<CylinderAnswer>(`${at(id)}/cylinder`, { signal });
