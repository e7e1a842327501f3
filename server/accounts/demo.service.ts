import type { Database, Tx } from '../database/connection.ts';
import type { TeamKind } from '../database/models/people.ts';
import { insertTeam, personByEmail, teamsOf } from './accounts.repository.ts';
import { setPassword } from './accounts.service.ts';
import { newId } from './ids.ts';
import { passwordFits } from './passwords.ts';

interface DemoPerson {
  email: string;
  name: string;
  team: { kind: TeamKind; name: string } | null;
  administrator: boolean;
}

/** One invented person of each role. Their names say what they are. */
const DEMO_PEOPLE: readonly DemoPerson[] = [
  {
    email: 'occupier@example.test',
    name: 'Olive Invented',
    team: { kind: 'household', name: 'Invented household' },
    administrator: false,
  },
  {
    email: 'installer@example.test',
    name: 'Ivor Invented',
    team: { kind: 'firm', name: 'Invented heating firm' },
    administrator: false,
  },
  {
    email: 'landlord@example.test',
    name: 'Linda Invented',
    team: { kind: 'landlord', name: 'Invented lettings' },
    administrator: false,
  },
  { email: 'administrator@example.test', name: 'Adam Invented', team: null, administrator: true },
];

/**
 * Makes the demo's people with their teams and this password. What is there stays; another password than
 * last time becomes theirs and ends their sessions. Safe twice, and for two who do it at once.
 */
export async function makeDemoPeople(db: Database, password: string): Promise<void> {
  await db.transaction(async (tx) => {
    await tx.query('lock table people in share row exclusive mode');
    for (const person of DEMO_PEOPLE) await makePerson(tx, person, password);
  });
}

async function makePerson(tx: Tx, { email, name, team, administrator }: DemoPerson, password: string): Promise<void> {
  const known = await personByEmail(tx, email);
  const id = known?.id ?? newId();
  if (!known)
    await tx.models.Person.create({ id, email, name, passwordHash: null, administrator, demo: true }, tx.within);
  if (!(await passwordFits(known?.passwordHash ?? null, password))) await setPassword(tx, id, password);
  if (team && !(await teamsOf(tx, id)).length) await insertTeam(tx, team.kind, team.name, id);
}
