import type { TokenList, TokenMade } from '../../shared/api/session.ts';
import type { Database, Scope, Tx } from '../database/connection.ts';
import type { TeamKind } from '../database/models/people.ts';
import { problem } from '../http/problems.ts';
import * as repository from './accounts.repository.ts';
import type { Person, Team } from './accounts.repository.ts';
import { hashOf, newId, newSecret } from './ids.ts';
import { hashPassword, passwordFits } from './passwords.ts';

export type { Person, Team };
export const { personById, teamsOf } = repository;

/** The person of this address if the password is theirs, else null; both take the same time. */
export async function personByPassword(scope: Scope, email: string, password: string): Promise<Person | null> {
  const found = await repository.personByEmail(scope, email.trim());
  if (!(await passwordFits(found?.passwordHash ?? null, password)) || !found) return null;
  const { passwordHash: _, ...person } = found;
  return person;
}

/** Sets a person's password, which ends their sessions. */
export async function setPassword(tx: Tx, personId: string, password: string): Promise<void> {
  await repository.updatePasswordHash(tx, personId, await hashPassword(password));
  await repository.endSessions(tx, personId);
}

/** The owner of a bearer token, or null. */
export function personByToken(scope: Scope, token: string): Promise<Person | null> {
  return repository.personByToken(scope, hashOf(token));
}

/** Makes a token that can do what its owner can; the secret is told this once and kept as a hash. */
export async function makeToken(db: Database, personId: string, name: string): Promise<TokenMade> {
  const token = `cn_${newSecret()}`;
  const id = newId();
  await repository.insertToken(db, { id, personId, name, hash: hashOf(token) });
  return { id, token };
}

export async function listTokens(db: Database, personId: string): Promise<TokenList> {
  const tokens = await repository.tokensOf(db, personId);
  return {
    tokens: tokens.map(({ id, name, createdAt, lastUsedAt }) => ({
      id,
      name,
      createdAt: createdAt.toISOString(),
      lastUsedAt: lastUsedAt?.toISOString() ?? null,
    })),
  };
}

/** Revokes a token of this person; throws not-found for any other. */
export async function revokeToken(db: Database, personId: string, id: string): Promise<void> {
  if (!(await repository.deleteToken(db, personId, id))) throw problem('not-found');
}

/** The team that is to hold something new of this person: the one asked for, else their first, else a new household. */
export async function holdingTeam(tx: Tx, person: Person, teamId: string | undefined): Promise<Team | null> {
  const teams = await repository.teamsOf(tx, person.id);
  if (teamId !== undefined) return teams.find((team) => team.id === teamId) ?? null;
  return teams[0] ?? (await newTeam(tx, person, 'household'));
}

/** The team that takes up a role: the one asked for, else the first of this kind, else a new one of it. */
export async function roleTeam(
  tx: Tx,
  person: Person,
  teamId: string | undefined,
  kind: TeamKind,
): Promise<Team | null> {
  const teams = await repository.teamsOf(tx, person.id);
  if (teamId !== undefined) return teams.find((team) => team.id === teamId) ?? null;
  return teams.find((team) => team.kind === kind && team.role !== 'reader') ?? (await newTeam(tx, person, kind));
}

function newTeam(tx: Tx, person: Person, kind: TeamKind): Promise<Team> {
  return repository.insertTeam(tx, kind, `${TEAM_NAME[kind]} of ${person.name}`, person.id);
}

const TEAM_NAME: Record<TeamKind, string> = { household: 'Household', firm: 'Firm', landlord: 'Lettings' };

/** A device is known to a person once they signed in on it; its failures are counted apart from strangers'. */
export async function deviceIsKnown(scope: Scope, email: string, device: string | undefined): Promise<boolean> {
  if (!device) return false;
  const person = await repository.personByEmail(scope, email.trim());
  return person !== null && (await repository.isKnownDevice(scope, person.id, hashOf(device)));
}

export async function rememberDevice(scope: Scope, personId: string, device: string): Promise<void> {
  await repository.noteDevice(scope, personId, hashOf(device));
}
