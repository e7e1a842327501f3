import {
  BoilerKinds,
  DatedSystem,
  DatedTariff,
  NewProperty,
  Property,
  PropertyList,
  PropertyPatch,
} from '../../shared/api/property.ts';
import { BOILER_KINDS } from '../../shared/energy/boilers.ts';
import { defineRoute } from '../http/route.ts';
import type { Route } from '../http/route.ts';
import {
  addProperty,
  changeProperty,
  listProperties,
  readProperty,
  recordSystem,
  recordTariff,
} from './properties.service.ts';

const tag = 'Properties';
const property = {
  description: 'The property, its records, and every default taken with its source',
  schema: Property,
};

export const propertyRoutes: Route[] = [
  defineRoute({
    method: 'get',
    path: '/api/properties',
    policy: 'signedIn',
    tag,
    summary: 'The properties one may see',
    answers: { 200: { description: 'By name', schema: PropertyList } },
    handle: async ({ deps, person }) => ({ status: 200, body: await listProperties(deps.db, person, deps.now()) }),
  }),
  defineRoute({
    method: 'post',
    path: '/api/properties',
    policy: 'signedIn',
    tag,
    summary: 'Add a property',
    description:
      'Any signed-in person may. Their team (teamId, else the one joined first, else a household made for them) holds the ' +
      'first grant, in the role of its kind; nobody else sees the property until a grant is given. A volume and a ' +
      'fuel are enough; what is left out is taken by default, and the answer says which and from where. Records ' +
      'without a date hold from the beginning, shown as 1970-01-01.',
    body: NewProperty,
    answers: { 201: property },
    problems: ['forbidden'],
    handle: async ({ deps, person, body }) => ({
      status: 201,
      body: await addProperty(deps.db, person, body, deps.now()),
    }),
  }),
  defineRoute({
    method: 'get',
    path: '/api/properties/:id',
    policy: { property: 'see' },
    tag,
    summary: 'A property',
    answers: { 200: property },
    handle: async ({ deps, access }) => ({ status: 200, body: await readProperty(deps.db, access, deps.now()) }),
  }),
  defineRoute({
    method: 'patch',
    path: '/api/properties/:id',
    policy: { property: 'edit' },
    tag,
    summary: 'Change name, place or ready time',
    description: 'What is not named stays. Another time zone re-derives the days and never re-interprets stamps.',
    body: PropertyPatch,
    answers: { 200: property },
    handle: async ({ deps, person, params, body }) => ({
      status: 200,
      body: await changeProperty(deps.db, person, params.id, body, deps.now()),
    }),
  }),
  defineRoute({
    method: 'put',
    path: '/api/properties/:id/system',
    policy: { property: 'edit' },
    tag,
    summary: 'Record what is fitted from a day on',
    description: 'The record holds from that day until the next one; a record of the same day is replaced.',
    body: DatedSystem,
    answers: { 200: property },
    handle: async ({ deps, person, params, body }) => ({
      status: 200,
      body: await recordSystem(deps.db, person, params.id, body, deps.now()),
    }),
  }),
  defineRoute({
    method: 'put',
    path: '/api/properties/:id/tariffs',
    policy: { property: 'edit' },
    tag,
    summary: 'Record prices from a day on',
    description:
      'The tariff holds from that day until the next one; one of the same day is replaced; without a day it holds from the beginning.',
    body: DatedTariff,
    answers: { 200: property },
    handle: async ({ deps, person, params, body }) => ({
      status: 200,
      body: await recordTariff(deps.db, person, params.id, body, deps.now()),
    }),
  }),
  defineRoute({
    method: 'get',
    path: '/api/reference/boiler-kinds',
    policy: 'signedIn',
    tag,
    summary: 'Kinds of boiler with their efficiencies',
    answers: {
      200: {
        description: 'Winter and summer (hot-water) efficiency as shares of gross, with source',
        schema: BoilerKinds,
      },
    },
    handle: async () => ({
      status: 200,
      body: { kinds: BOILER_KINDS.map((kind) => ({ ...kind, fuels: [...kind.fuels] })) },
    }),
  }),
];
