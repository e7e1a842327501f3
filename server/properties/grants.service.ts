import type { Consent, Grant, GrantList, NewGrant, Offer, OfferList } from '../../shared/api/grant.ts';
import type { Role } from '../../shared/api/property.ts';
import { roleTeam } from '../accounts/accounts.service.ts';
import type { Person } from '../accounts/accounts.service.ts';
import { newId } from '../accounts/ids.ts';
import type { Database, Tx } from '../database/connection.ts';
import type { TeamKind } from '../database/models/people.ts';
import { badFields, problem } from '../http/problems.ts';
import type { PropertyAccess } from './access.service.ts';
import * as repository from './grants.repository.ts';
import type { StandingGrant } from './grants.repository.ts';
import { leaveTrail } from './trail.service.ts';

const KIND_OF: Record<Role, TeamKind> = { occupier: 'household', installer: 'firm', landlord: 'landlord' };

/** Every grant of a property, also those that have ended. */
export async function listGrants(db: Database, propertyId: string): Promise<GrantList> {
  return { grants: (await repository.grantsOf(db, propertyId)).map(shown) };
}

/**
 * Gives a role at the property to whoever owns the address. Nothing is looked up, so that the answer is
 * the same for known and unknown addresses; it begins to hold when that person accepts it.
 * Given again while it waits, the first one stays, with the new dates.
 */
export async function giveGrant(
  db: Database,
  person: Person,
  access: PropertyAccess,
  { email, role, from, until }: NewGrant,
  now: Date,
): Promise<Grant> {
  if (until && new Date(until) <= now) throw badFields([{ path: 'until', message: 'later than now' }]);
  const { propertyId } = access;
  const address = email.toLowerCase();
  const dates = { ...(from && { startsAt: new Date(from) }), endsAt: until ? new Date(until) : null };
  return db.transaction(async (tx) => {
    const waiting = (g: StandingGrant) => g.email === address && g.role === role && !g.acceptedAt && !g.withdrawnAt;
    const grants = await repository.lockGrants(tx, propertyId);
    if (role === 'occupier' && access.role !== 'occupier' && grants.some((g) => g.role === 'occupier' && g.holds))
      throw problem('forbidden', 'The home is occupied: another occupier is added by those who live there.');
    const pending = grants.find(waiting);
    if (pending) await repository.updateGrant(tx, pending, dates);
    else
      await repository.insertGrant(tx, {
        propertyId,
        id: newId(8),
        role,
        email: address,
        teamId: null,
        givenBy: person.id,
        givenAs: access.role,
        ...dates,
      });
    await leaveTrail(tx, propertyId, person.id, 'grant given', { role });
    const given = (await repository.grantsOf(tx, propertyId)).find(waiting);
    if (!given) throw new Error(`The grant just given at ${propertyId} is not there.`);
    return shown(given);
  });
}

/**
 * Ends a grant, from the next request on. An occupier may end any but a landlord's, a landlord any, the
 * installer who keeps the property any installer's; what nobody has accepted yet, each of them.
 * Twice is once.
 */
export async function withdrawGrant(
  db: Database,
  person: Person,
  access: PropertyAccess,
  grantId: string,
  now: Date,
): Promise<void> {
  await db.transaction(async (tx) => {
    const grants = await repository.lockGrants(tx, access.propertyId);
    const grant = grants.find(({ id }) => fullId(access.propertyId, id) === grantId);
    if (!grant) throw problem('not-found');
    if (grant.acceptedAt && !MAY_END[access.role].includes(grant.role) && !access.teamIds.includes(grant.teamId ?? ''))
      throw problem('forbidden', `As ${access.role} you cannot end the ${grant.role}’s grant.`);
    await end(tx, person, grants, grant, 'grant withdrawn', now);
  });
}

const MAY_END: Record<Role, readonly Role[]> = {
  occupier: ['occupier', 'installer'],
  installer: ['installer'],
  landlord: ['occupier', 'installer', 'landlord'],
};

/** What was given to this person's address and waits for an answer. */
export async function listOffers(db: Database, person: Person): Promise<OfferList> {
  return { offers: (await repository.openOffers(db, person.email)).map(offered) };
}

/**
 * Takes a grant up for one of the person's teams: the one asked for, else one of the kind that fits the
 * role, else a new one. Accepting it again changes nothing.
 */
export async function acceptGrant(
  db: Database,
  person: Person,
  grantId: string,
  teamId: string | undefined,
  now: Date,
): Promise<Offer> {
  return db.transaction(async (tx) => {
    const { grants, grant } = await ofPerson(tx, person, grantId);
    if (grant.withdrawnAt || grant.ended) throw problem('not-found');
    const offer = offered({ ...grant, propertyName: await repository.propertyName(tx, grant.propertyId) });
    if (grant.acceptedAt) return offer;
    const team = await roleTeam(tx, person, teamId, KIND_OF[grant.role]);
    if (!team) throw badFields([{ path: 'teamId', message: 'none of your teams has this id' }]);
    if (team.role === 'reader')
      throw problem('forbidden', 'In this team you are a reader, which does not include to accept grants.');
    const lets = grants.some((g) => g.teamId === team.id && g.role === 'landlord' && g.holds);
    if (lets && grant.role === 'occupier')
      throw problem(
        'conflict',
        'A team cannot be landlord and occupier of the same property: consent would mean nothing.',
      );
    await repository.updateGrant(tx, grant, { acceptedAt: now, teamId: team.id });
    await leaveTrail(tx, grant.propertyId, person.id, 'grant accepted', { role: grant.role, team: team.name });
    return offer;
  });
}

/** Turns down what was offered, or gives up what one's team has. Twice is once. */
export async function declineGrant(db: Database, person: Person, grantId: string, now: Date): Promise<void> {
  await db.transaction(async (tx) => {
    const { grants, grant } = await ofPerson(tx, person, grantId);
    await end(tx, person, grants, grant, 'grant declined', now);
  });
}

/** As the occupier, lets landlords see anything finer than a day, or no longer. */
export async function setTracesConsent(
  db: Database,
  person: Person,
  { propertyId, teamIds }: PropertyAccess,
  { traces }: Consent,
  now: Date,
): Promise<Consent> {
  await db.transaction(async (tx) => {
    await repository.setConsent(tx, propertyId, teamIds, traces ? now : null);
    await leaveTrail(tx, propertyId, person.id, traces ? 'traces consented' : 'traces consent withdrawn');
  });
  return { traces };
}

/** A property always keeps someone who sees it, or it could never be reached again. */
async function end(
  tx: Tx,
  person: Person,
  grants: StandingGrant[],
  grant: StandingGrant,
  act: 'grant withdrawn' | 'grant declined',
  now: Date,
): Promise<void> {
  if (grant.withdrawnAt) return;
  const lasts = (g: StandingGrant) => g.holds && g.endsAt === null;
  if (lasts(grant) && !grants.some((other) => other.id !== grant.id && lasts(other)))
    throw problem('conflict', 'This is the last grant without an end: give the property to someone else first.');
  await repository.updateGrant(tx, grant, { withdrawnAt: now });
  await leaveTrail(tx, grant.propertyId, person.id, act, { role: grant.role });
}

/** The grant of this id if it was given to this person or is their team's; for anyone else there is none. */
async function ofPerson(
  tx: Tx,
  person: Person,
  grantId: string,
): Promise<{ grants: StandingGrant[]; grant: StandingGrant }> {
  const [propertyId = ''] = grantId.split('-', 1);
  const grants = /^[a-z0-9]{16}-[a-z0-9]{1,16}$/.test(grantId) ? await repository.lockGrants(tx, propertyId) : [];
  const grant = grants.find(({ id }) => fullId(propertyId, id) === grantId);
  const mine = grant?.acceptedAt
    ? await repository.actsForTeam(tx, person.id, grant.teamId ?? '')
    : grant?.email === person.email;
  if (!grant || !mine) throw problem('not-found');
  return { grants, grant };
}

const fullId = (propertyId: string, id: string) => `${propertyId}-${id}`;

function offered(grant: {
  propertyId: string;
  id: string;
  role: Role;
  propertyName: string;
  givenAt: Date;
  endsAt: Date | null;
}): Offer {
  return {
    id: fullId(grant.propertyId, grant.id),
    role: grant.role,
    property: { id: grant.propertyId, name: grant.propertyName },
    givenAt: grant.givenAt.toISOString(),
    until: grant.endsAt?.toISOString() ?? null,
  };
}

function shown(grant: StandingGrant): Grant {
  return {
    id: fullId(grant.propertyId, grant.id),
    role: grant.role,
    status: statusOf(grant),
    email: grant.email,
    team: grant.teamName,
    keeps: grant.keeps,
    givenAt: grant.givenAt.toISOString(),
    acceptedAt: grant.acceptedAt?.toISOString() ?? null,
    from: grant.startsAt.toISOString(),
    until: grant.endsAt?.toISOString() ?? null,
    tracesConsent: grant.role === 'occupier' ? grant.tracesConsentAt !== null : null,
  };
}

function statusOf(grant: StandingGrant): Grant['status'] {
  if (grant.withdrawnAt) return 'withdrawn';
  if (grant.ended) return 'ended';
  return grant.acceptedAt ? 'accepted' : 'given';
}
