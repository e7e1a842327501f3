import { CylinderAnswer, DaysAnswer, DaysQuery } from '../../shared/api/day.ts';
import { defineRoute } from '../http/route.ts';
import type { Route } from '../http/route.ts';
import { readCylinder } from './cylinder.service.ts';
import { readDays } from './days.service.ts';

export const dayRoutes: Route[] = [
  defineRoute({
    method: 'get',
    path: '/api/properties/:id/days',
    policy: { property: 'days' },
    tag: 'Figures',
    summary: 'The daily figures',
    description:
      'One day for each date from `from` to `to`, both included, 4,000 at most, and their total. A figure that is not ' +
      'known is null, and `reasons` says why.',
    query: DaysQuery,
    answers: { 200: { description: 'In order of date', schema: DaysAnswer } },
    handle: async ({ deps: { db }, params, query }) => ({
      status: 200,
      body: await readDays(db, params.id, query.from, query.to),
    }),
  }),
  defineRoute({
    method: 'get',
    path: '/api/properties/:id/cylinder',
    policy: { property: 'days' },
    tag: 'Figures',
    summary: 'How the cylinder holds its heat',
    description: 'Null where readings do not show it yet; the loss as declared stands beside it.',
    answers: {
      200: { description: 'Loss in W per K, and the part of diverted energy that is useful', schema: CylinderAnswer },
    },
    handle: async ({ deps: { db }, params }) => ({ status: 200, body: await readCylinder(db, params.id) }),
  }),
];
