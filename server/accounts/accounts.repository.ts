import type { Scope, Tx } from '../database/connection.ts';
import type { MemberRole, TeamKind } from '../database/models/people.ts';
import { newId } from './ids.ts';

/** A person as the rest of the server knows them. */
export interface Person {
  id: string;
  email: string;
  name: string;
  administrator: boolean;
  /** An invented person of the demo. */
  demo: boolean;
}

export interface Team {
  id: string;
  kind: TeamKind;
  name: string;
  role: MemberRole;
}

const PERSON = 'people.id, people.email, people.name, people.administrator, people.demo';

export async function personById(scope: Scope, id: string): Promise<Person | null> {
  const [person] = await scope.query<Person>(`select ${PERSON} from people where id = $1`, [id]);
  return person ?? null;
}

export async function personByEmail(
  scope: Scope,
  email: string,
): Promise<(Person & { passwordHash: string | null }) | null> {
  const row = await scope.models.Person.findOne({ where: { email: email.toLowerCase() }, ...scope.within });
  return row?.get({ plain: true }) ?? null;
}

export async function updatePasswordHash(tx: Tx, personId: string, passwordHash: string): Promise<void> {
  await tx.models.Person.update({ passwordHash }, { where: { id: personId }, ...tx.within });
}

export async function endSessions(tx: Tx, personId: string): Promise<void> {
  await tx.query(`delete from sessions where sess -> 'passport' ->> 'user' = $1`, [personId]);
}

/** The owner of a token, whose use is noted at most once a minute. */
export async function personByToken(scope: Scope, hash: Buffer): Promise<Person | null> {
  const [found] = await scope.query<Person & { tokenId: string; stale: boolean }>(
    `select ${PERSON}, tokens.id as "tokenId",
       coalesce(tokens.last_used_at < now() - interval '1 minute', true) as stale
     from tokens join people on people.id = tokens.person_id where tokens.hash = $1`,
    [hash],
  );
  if (!found) return null;
  const { tokenId, stale, ...person } = found;
  if (stale) await scope.query('update tokens set last_used_at = now() where id = $1', [tokenId]);
  return person;
}

export async function insertToken(scope: Scope, token: { id: string; personId: string; name: string; hash: Buffer }) {
  await scope.models.Token.create(token, scope.within);
}

export async function tokensOf(scope: Scope, personId: string) {
  const rows = await scope.models.Token.findAll({ where: { personId }, order: ['createdAt', 'id'], ...scope.within });
  return rows.map((row) => row.get({ plain: true }));
}

export async function deleteToken(scope: Scope, personId: string, id: string): Promise<boolean> {
  return (await scope.models.Token.destroy({ where: { personId, id }, ...scope.within })) > 0;
}

/** A person's teams, the one joined first at the front. */
export function teamsOf(scope: Scope, personId: string): Promise<Team[]> {
  return scope.query<Team>(
    `select teams.id, teams.kind, teams.name, memberships.role
     from memberships join teams on teams.id = memberships.team_id
     where memberships.person_id = $1 order by memberships.created_at, teams.id`,
    [personId],
  );
}

export async function insertTeam(tx: Tx, kind: TeamKind, name: string, ownerId: string): Promise<Team> {
  const id = newId();
  await tx.models.Team.create({ id, kind, name }, tx.within);
  await tx.models.Membership.create({ teamId: id, personId: ownerId, role: 'owner' }, tx.within);
  return { id, kind, name, role: 'owner' };
}

export async function isKnownDevice(scope: Scope, personId: string, hash: Buffer): Promise<boolean> {
  const rows = await scope.query('select from known_devices where person_id = $1 and hash = $2', [personId, hash]);
  return rows.length > 0;
}

export async function noteDevice(scope: Scope, personId: string, hash: Buffer): Promise<void> {
  await scope.query(
    `insert into known_devices (person_id, hash) values ($1, $2)
     on conflict (person_id, hash) do update set used_at = now()`,
    [personId, hash],
  );
}
