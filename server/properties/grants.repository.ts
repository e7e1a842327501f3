import { Op } from 'sequelize';
import type { Attributes, CreationAttributes } from 'sequelize';
import type { Role } from '../../shared/api/property.ts';
import type { Scope, Tx } from '../database/connection.ts';
import type { MemberRole } from '../database/models/people.ts';
import type { GrantRow } from '../database/models/properties.ts';

export type GrantFields = Attributes<GrantRow>;

/** A grant that holds at this moment, seen from one person. */
export interface HeldGrant {
  id: string;
  role: Role;
  givenAs: Role | null;
  teamId: string;
  /** The person's part in that team. */
  member: MemberRole;
  /** Whether that team keeps the property. */
  keeps: boolean;
  /** Whether every occupier of the property consents to traces, and there is one. */
  consent: boolean;
}

/** SQL: the grant of this alias holds now. Expiry and withdrawal count from the very next request. */
const holds = (g: string) =>
  `(${g}.accepted_at is not null and ${g}.withdrawn_at is null
    and ${g}.starts_at <= now() and (${g}.ends_at is null or ${g}.ends_at > now()))`;

const HELD = `
  select g.property_id as "propertyId", g.id, g.role, g.given_as as "givenAs", g.team_id as "teamId", m.role as member,
    g.team_id = p.team_id as keeps,
    coalesce((select bool_and(o.traces_consent_at is not null) from grants o
      where o.property_id = g.property_id and o.role = 'occupier' and ${holds('o')}), false) as consent
  from memberships m
  join grants g on g.team_id = m.team_id and ${holds('g')}
  join properties p on p.id = g.property_id
  where m.person_id = $1`;

export function heldGrants(scope: Scope, personId: string, propertyId: string): Promise<HeldGrant[]> {
  return scope.query<HeldGrant>(`${HELD} and g.property_id = $2`, [personId, propertyId]);
}

/** All grants that hold for a person, by property. */
export async function heldGrantsByProperty(scope: Scope, personId: string): Promise<Map<string, HeldGrant[]>> {
  const byProperty = new Map<string, HeldGrant[]>();
  for (const row of await scope.query<HeldGrant & { propertyId: string }>(HELD, [personId])) {
    const list = byProperty.get(row.propertyId);
    if (list) list.push(row);
    else byProperty.set(row.propertyId, [row]);
  }
  return byProperty;
}

/** The grant of the team that adds a property: accepted from the start. */
export async function insertFirstGrant(
  tx: Tx,
  grant: { propertyId: string; id: string; role: Role; teamId: string; givenBy: string },
): Promise<void> {
  await tx.models.Grant.create({ ...grant, email: null, givenAs: null, acceptedAt: new Date() }, tx.within);
}

export async function insertGrant(tx: Tx, grant: CreationAttributes<GrantRow>): Promise<void> {
  await tx.models.Grant.create(grant, tx.within);
}

export async function updateGrant(
  tx: Tx,
  { propertyId, id }: GrantFields,
  fields: Partial<GrantFields>,
): Promise<void> {
  await tx.models.Grant.update(fields, { where: { propertyId, id }, ...tx.within });
}

/** A grant as it stands by the database's clock, the only one that decides what holds. */
export interface StandingGrant extends GrantFields {
  holds: boolean;
  /** Its time has run out. */
  ended: boolean;
  teamName: string | null;
  /** Whether its team keeps the property. */
  keeps: boolean;
}

/** All grants of a property with the names of their teams, oldest first. */
export function grantsOf(scope: Scope, propertyId: string): Promise<StandingGrant[]> {
  return scope.query<StandingGrant>(
    `select g.property_id as "propertyId", g.id, g.role, g.email, g.team_id as "teamId", g.given_by as "givenBy",
       g.given_as as "givenAs", g.given_at as "givenAt", g.accepted_at as "acceptedAt", g.starts_at as "startsAt",
       g.ends_at as "endsAt", g.withdrawn_at as "withdrawnAt", g.traces_consent_at as "tracesConsentAt",
       ${holds('g')} as holds, coalesce(g.ends_at <= now(), false) as ended,
       teams.name as "teamName", coalesce(g.team_id = p.team_id, false) as keeps
     from grants g join properties p on p.id = g.property_id left join teams on teams.id = g.team_id
     where g.property_id = $1 order by g.given_at, g.id`,
    [propertyId],
  );
}

/** The same, while nobody else changes them until the transaction ends. */
export async function lockGrants(tx: Tx, propertyId: string): Promise<StandingGrant[]> {
  await tx.query('select from properties where id = $1 for update', [propertyId]);
  return grantsOf(tx, propertyId);
}

/** What waits for the owner of this address, oldest first. */
export async function openOffers(scope: Scope, email: string) {
  return scope.query<{
    propertyId: string;
    id: string;
    role: Role;
    propertyName: string;
    givenAt: Date;
    endsAt: Date | null;
  }>(
    `select g.property_id as "propertyId", g.id, g.role, p.name as "propertyName", g.given_at as "givenAt", g.ends_at as "endsAt"
     from grants g join properties p on p.id = g.property_id
     where g.email = $1 and g.accepted_at is null and g.withdrawn_at is null and (g.ends_at is null or g.ends_at > now())
     order by g.given_at, g.id`,
    [email],
  );
}

export async function propertyName(scope: Scope, propertyId: string): Promise<string> {
  const [row] = await scope.query<{ name: string }>('select name from properties where id = $1', [propertyId]);
  return row?.name ?? '';
}

/** Whether the person belongs to the team and is more than a reader in it. */
export async function actsForTeam(scope: Scope, personId: string, teamId: string): Promise<boolean> {
  const rows = await scope.query(`select from memberships where person_id = $1 and team_id = $2 and role <> 'reader'`, [
    personId,
    teamId,
  ]);
  return rows.length > 0;
}

export async function setConsent(
  tx: Tx,
  propertyId: string,
  teamIds: readonly string[],
  since: Date | null,
): Promise<void> {
  await tx.models.Grant.update(
    { tracesConsentAt: since },
    {
      where: { propertyId, teamId: { [Op.in]: [...teamIds] }, role: 'occupier', withdrawnAt: null },
      ...tx.within,
    },
  );
}
