import { AcceptGrant, Consent, Grant, GrantList, NewGrant, Offer, OfferList, Trail } from '../../shared/api/grant.ts';
import { defineRoute } from '../http/route.ts';
import type { Route } from '../http/route.ts';
import {
  acceptGrant,
  declineGrant,
  giveGrant,
  listGrants,
  listOffers,
  setTracesConsent,
  withdrawGrant,
} from './grants.service.ts';
import { trailOf } from './trail.service.ts';

const tag = 'Grants';

export const grantRoutes: Route[] = [
  defineRoute({
    method: 'get',
    path: '/api/properties/:id/grants',
    policy: { property: 'grants' },
    tag,
    summary: 'Who has which role at a property',
    answers: { 200: { description: 'Oldest first, also those that have ended', schema: GrantList } },
    handle: async ({ deps, params }) => ({ status: 200, body: await listGrants(deps.db, params.id) }),
  }),
  defineRoute({
    method: 'post',
    path: '/api/properties/:id/grants',
    policy: { property: 'grants' },
    tag,
    summary: 'Give a role to whoever owns an address',
    description:
      'It begins to hold when that person accepts it. The answer is the same for known and unknown addresses. Given ' +
      'again while it waits, the first one stays, with the new dates.',
    body: NewGrant,
    answers: { 201: { description: 'The grant', schema: Grant } },
    problems: ['conflict'],
    handle: async ({ deps, person, access, body }) => ({
      status: 201,
      body: await giveGrant(deps.db, person, access, body, deps.now()),
    }),
  }),
  defineRoute({
    method: 'delete',
    path: '/api/properties/:id/grants/:grantId',
    policy: { property: 'grants' },
    tag,
    summary: 'Withdraw a grant',
    description:
      'It counts from the next request on. A landlord’s grant is not the occupier’s to end; the last grant without an ' +
      'end cannot be withdrawn. A second time answers the same.',
    answers: { 204: { description: 'It no longer holds' } },
    problems: ['conflict'],
    handle: async ({ deps, person, access, params }) => {
      await withdrawGrant(deps.db, person, access, params.grantId, deps.now());
      return { status: 204 };
    },
  }),
  defineRoute({
    method: 'put',
    path: '/api/properties/:id/consent',
    policy: { property: 'consent' },
    tag,
    summary: 'Let landlords see traces, or no longer',
    description:
      'As the occupier. Without it a landlord sees daily figures and nothing finer: no traces, originals or rejected ' +
      'rows, also of logs that the landlord’s own team sent. With several occupiers all must consent.',
    body: Consent,
    answers: { 200: { description: 'As it stands now', schema: Consent } },
    handle: async ({ deps, person, access, body }) => ({
      status: 200,
      body: await setTracesConsent(deps.db, person, access, body, deps.now()),
    }),
  }),
  defineRoute({
    method: 'get',
    path: '/api/properties/:id/trail',
    policy: { property: 'grants' },
    tag,
    summary: 'What people did to access, records and logs',
    answers: { 200: { description: 'The last thousand entries, newest first', schema: Trail } },
    handle: async ({ deps, params }) => ({ status: 200, body: await trailOf(deps.db, params.id) }),
  }),
  defineRoute({
    method: 'get',
    path: '/api/grants',
    policy: 'signedIn',
    tag,
    summary: 'What was given to one and waits for an answer',
    answers: { 200: { description: 'Oldest first', schema: OfferList } },
    handle: async ({ deps, person }) => ({ status: 200, body: await listOffers(deps.db, person) }),
  }),
  defineRoute({
    method: 'post',
    path: '/api/grants/:id/accept',
    policy: 'signedIn',
    tag,
    summary: 'Accept a grant',
    description: 'For one of one’s teams: teamId, else one whose kind fits the role, else a new one.',
    body: AcceptGrant,
    answers: { 200: { description: 'The grant; it holds now', schema: Offer } },
    problems: ['not-found', 'forbidden', 'conflict'],
    handle: async ({ deps, person, params, body }) => ({
      status: 200,
      body: await acceptGrant(deps.db, person, params.id, body.teamId, deps.now()),
    }),
  }),
  defineRoute({
    method: 'delete',
    path: '/api/grants/:id',
    policy: 'signedIn',
    tag,
    summary: 'Decline a grant, or give up one’s own',
    answers: { 204: { description: 'It does not hold' } },
    problems: ['not-found', 'conflict'],
    handle: async ({ deps, person, params }) => {
      await declineGrant(deps.db, person, params.id, deps.now());
      return { status: 204 };
    },
  }),
];
