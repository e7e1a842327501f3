import { ReadingsAnswer, ReadingsQuery } from '../../shared/api/day.ts';
import { defineRoute } from '../http/route.ts';
import type { Route } from '../http/route.ts';
import { readSeries } from './series.service.ts';

export const readingRoutes: Route[] = [
  defineRoute({
    method: 'get',
    path: '/api/properties/:id/readings',
    policy: { property: 'traces' },
    tag: 'Figures',
    summary: 'One channel over time',
    description:
      'At most `points` points (2,000 without it) from `from` to before `to`, the extremes kept, gaps as [instant, null]. ' +
      'Energies and registers come as mean power in W, volumes of fuel as m3/h; with `as=read` values come as written.',
    query: ReadingsQuery,
    answers: { 200: { description: 'In order of time', schema: ReadingsAnswer } },
    handle: async ({ deps: { db }, params, query: { as, ...query } }) => ({
      status: 200,
      body: await readSeries(db, params.id, { ...query, asRead: as === 'read' }),
    }),
  }),
];
