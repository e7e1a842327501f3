import type {
  DatedSystem,
  DatedTariff,
  NewProperty,
  Property,
  PropertyList,
  PropertyPatch,
  PropertySummary,
  Role,
} from '../../shared/api/property.ts';
import { DEFAULTS, defaultsTaken } from '../../shared/energy/defaults.ts';
import type { Home } from '../../shared/energy/home.ts';
import { zoneOf } from '../../shared/time/zone.ts';
import { holdingTeam } from '../accounts/accounts.service.ts';
import type { Person } from '../accounts/accounts.service.ts';
import { newId } from '../accounts/ids.ts';
import type { Database, Scope, Tx } from '../database/connection.ts';
import type { TeamKind } from '../database/models/people.ts';
import { badFields, problem } from '../http/problems.ts';
import { askToRefresh } from '../jobs/work.ts';
import { accessBy, propertyAccess } from './access.service.ts';
import type { PropertyAccess } from './access.service.ts';
import { heldGrantsByProperty, insertFirstGrant } from './grants.repository.ts';
import * as repository from './properties.repository.ts';
import type { StoredProperty } from './properties.repository.ts';
import { leaveTrail } from './trail.service.ts';

export const { lockProperty, setDaySpan } = repository;

/** A record without a date holds from the beginning. */
const BEGINNING = '1970-01-01';

const ROLE_OF: Record<TeamKind, Role> = { household: 'occupier', firm: 'installer', landlord: 'landlord' };

/** The properties that this person may see, by name. */
export async function listProperties(db: Database, person: Person, now: Date): Promise<PropertyList> {
  const grants = await heldGrantsByProperty(db, person.id);
  const stored = await repository.loadProperties(db, [...grants.keys()]);
  return {
    properties: stored.flatMap((property) => {
      const access = accessBy(property.id, grants.get(property.id) ?? []);
      return access ? [summary(property, access, now)] : [];
    }),
  };
}

/** A property with its records and every default taken; the caller's access was decided before. */
export async function readProperty(scope: Scope, access: PropertyAccess, now: Date): Promise<Property> {
  const [stored] = await repository.loadProperties(scope, [access.propertyId]);
  if (!stored) throw problem('not-found');
  const system = inForce(stored.systems, stored.timeZone, now);
  if (!system) throw new Error(`Property ${stored.id} has no system record.`);
  return {
    ...summary(stored, access, now),
    latitude: stored.latitude,
    longitude: stored.longitude,
    ready: readyOf(stored),
    system,
    tariff: inForce(stored.tariffs, stored.timeZone, now) ?? null,
    systems: stored.systems,
    tariffs: stored.tariffs,
    defaults: defaultsTaken(
      { time: stored.readyTime ?? undefined, temperatureC: stored.readyTemperatureC ?? undefined },
      system,
    ),
    teamId: stored.teamId,
    mayEdit: access.may('edit'),
    mayUpload: access.may('upload'),
    maySeeTraces: access.may('traces'),
    mayGrant: access.may('grants'),
    mayConsent: access.may('consent'),
    tracesConsent: access.tracesConsent,
  };
}

/**
 * Adds a property. The team that holds it gets the first grant, in the role of its kind; a person without
 * any team gets a household.
 */
export async function addProperty(db: Database, person: Person, body: NewProperty, now: Date): Promise<Property> {
  return db.transaction(async (tx) => {
    const team = await holdingTeam(tx, person, body.teamId);
    if (!team) throw badFields([{ path: 'teamId', message: 'none of your teams has this id' }]);
    if (team.role === 'reader')
      throw problem('forbidden', 'In this team you are a reader, which does not include to add properties.');
    const id = newId();
    await repository.insertProperty(tx, {
      id,
      name: body.name,
      timeZone: body.timeZone,
      country: body.country ?? null,
      latitude: body.latitude ?? null,
      longitude: body.longitude ?? null,
      readyTime: body.ready?.time ?? null,
      readyTemperatureC: body.ready?.temperatureC ?? null,
      teamId: team.id,
      // The demo's own homes say so in their name; a home that a visitor adds to try their own log is not invented.
      demo: person.demo && body.name.endsWith('(demo)'),
      createdBy: person.id,
    });
    await insertFirstGrant(tx, {
      propertyId: id,
      id: newId(8),
      role: ROLE_OF[team.kind],
      teamId: team.id,
      givenBy: person.id,
    });
    const { from, ...system } = body.system;
    await repository.putSystem(tx, id, from ?? BEGINNING, system, person.id);
    if (body.tariff) {
      const { from: tariffFrom, ...tariff } = body.tariff;
      await repository.putTariff(tx, id, tariffFrom ?? BEGINNING, tariff, person.id);
    }
    await leaveTrail(tx, id, person.id, 'property added', { team: team.name });
    return readAfter(tx, person, id, now);
  });
}

/** Changes what a property's record says of place and ready time; what is not named stays. */
export async function changeProperty(
  db: Database,
  person: Person,
  propertyId: string,
  { ready, ...fields }: PropertyPatch,
  now: Date,
): Promise<Property> {
  return db.transaction(async (tx) => {
    await repository.updateProperty(tx, propertyId, {
      ...fields,
      ...(ready?.time !== undefined && { readyTime: ready.time }),
      ...(ready?.temperatureC !== undefined && { readyTemperatureC: ready.temperatureC }),
    });
    await leaveTrail(tx, propertyId, person.id, 'property changed', {
      fields: Object.keys({ ...fields, ...(ready && { ready }) }),
    });
    const { name: _name, ...weighty } = { ...fields, ...ready };
    if (Object.keys(weighty).length) await askToRefresh(tx, propertyId, 'derive');
    return readAfter(tx, person, propertyId, now);
  });
}

/** Records what is fitted from a day on; a record of the same day is replaced. */
export async function recordSystem(
  db: Database,
  person: Person,
  propertyId: string,
  { from, ...record }: DatedSystem,
  now: Date,
): Promise<Property> {
  return db.transaction(async (tx) => {
    await repository.putSystem(tx, propertyId, from, record, person.id);
    await leaveTrail(tx, propertyId, person.id, 'system recorded', { from });
    await askToRefresh(tx, propertyId, 'derive');
    return readAfter(tx, person, propertyId, now);
  });
}

/** Records prices from a day on, or from the beginning; a tariff of the same day is replaced. */
export async function recordTariff(
  db: Database,
  person: Person,
  propertyId: string,
  { from = BEGINNING, ...record }: DatedTariff,
  now: Date,
): Promise<Property> {
  return db.transaction(async (tx) => {
    await repository.putTariff(tx, propertyId, from, record, person.id);
    await leaveTrail(tx, propertyId, person.id, 'tariff recorded', { from });
    await askToRefresh(tx, propertyId, 'derive');
    return readAfter(tx, person, propertyId, now);
  });
}

/** What the figures need to know of a property; null if there is none of this id. */
export async function homeOf(scope: Scope, propertyId: string): Promise<Home | null> {
  const [stored] = await repository.loadProperties(scope, [propertyId]);
  if (!stored) return null;
  const { timeZone, country, latitude, longitude, systems, tariffs } = stored;
  return { timeZone, country, latitude, longitude, ready: readyOf(stored), systems, tariffs };
}

async function readAfter(tx: Tx, person: Person, propertyId: string, now: Date): Promise<Property> {
  const access = await propertyAccess(tx, person.id, propertyId);
  if (!access) throw problem('not-found');
  return readProperty(tx, access, now);
}

function summary(stored: StoredProperty, { role }: PropertyAccess, now: Date): PropertySummary {
  const { id, name, timeZone, country, firstDay, lastDay, demo, systems } = stored;
  const volumeLitres = inForce(systems, timeZone, now)?.cylinder.volumeLitres;
  if (volumeLitres === undefined) throw new Error(`Property ${id} has no system record.`);
  return { id, name, timeZone, country, role, firstDay, lastDay, volumeLitres, demo };
}

const readyOf = ({ readyTime, readyTemperatureC }: StoredProperty) => ({
  time: readyTime ?? DEFAULTS.readyTime.value,
  temperatureC: readyTemperatureC ?? DEFAULTS.readyTemperatureC.value,
});

/** The last record that has begun by today at the property; before the first one, the first. */
function inForce<Dated extends { from?: string }>(records: Dated[], timeZone: string, now: Date): Dated | undefined {
  const today = zoneOf(timeZone).civilOf(now.getTime());
  return records.findLast((record) => (record.from ?? BEGINNING) <= today) ?? records[0];
}
