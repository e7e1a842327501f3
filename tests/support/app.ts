import type { Express } from 'express';
import { beforeAll } from 'vitest';
import supertest from 'supertest';
import type { Agent } from 'supertest';
import type { NewProperty, Property, Role } from '../../shared/api/property.ts';
import { newId } from '../../server/accounts/ids.ts';
import { hashPassword } from '../../server/accounts/passwords.ts';
import { createApp } from '../../server/app.ts';
import { readConfig } from '../../server/config.ts';
import type { Config } from '../../server/config.ts';
import type { Database } from '../../server/database/connection.ts';
import type { MemberRole, TeamKind } from '../../server/database/models/people.ts';
import type { Deps } from '../../server/deps.ts';
import { makeLogger } from '../../server/http/logs.ts';
import { useDatabase } from './database.ts';

export const PASSWORD = 'an invented password';
let passwordHash: Promise<string> | undefined;
let count = 0;

/** Someone in a test, signed in by a cookie of their own. */
export interface TestPerson {
  id: string;
  email: string;
  name: string;
  teamId: string;
  /** Calls with the person's cookie, as a script would: without Origin. */
  agent: Agent;
}

/** The least that describes a property. */
export const SMALL_HOME: NewProperty = {
  name: 'Invented home',
  timeZone: 'Europe/London',
  system: { cylinder: { volumeLitres: 210 }, boiler: { fuel: 'gas' } },
};

export interface TestApp {
  readonly app: Express;
  readonly deps: Deps;
  readonly db: Database;
  /** What the process wrote to its log, line by line. */
  readonly log: string[];
  /** Without a session. */
  nobody(): Agent;
  /** Makes a person with a team of their own and signs them in. */
  person(kind?: TeamKind): Promise<TestPerson>;
  /** Makes a person who joins another's team, and signs them in. */
  member(of: TestPerson, role: MemberRole): Promise<TestPerson>;
  /** Signs a person in once more, on a device of its own. */
  signIn(email: string, password?: string): Promise<Agent>;
  /** Adds a property over HTTP. */
  property(owner: TestPerson, fields?: Partial<NewProperty>): Promise<Property>;
  /** Gives a role over HTTP and accepts it; returns the grant's id. */
  grant(owner: TestPerson, propertyId: string, to: TestPerson, role: Role, until?: Date): Promise<string>;
}

/**
 * The application on a database of the test file's own. Its fields can be read inside tests and hooks only.
 *
 * @param settings over the defaults; `now` is the clock
 */
export function useApp(settings: Partial<Config> & { now?: () => Date } = {}): TestApp {
  const database = useDatabase();
  const log: string[] = [];
  let app: Express | null = null;
  let deps: Deps | null = null;

  beforeAll(async () => {
    const { now = () => new Date(), ...config } = settings;
    deps = {
      config: { ...readConfig({ DATABASE_URL: database.url }), ...config },
      db: database.db,
      logger: makeLogger('debug', { write: (line: string) => void log.push(line) }),
      now,
    };
    app = await createApp(deps);
  });

  const there = <T>(value: T | null): T => {
    if (value === null) throw new Error('The application is there from beforeAll on: read it inside a test or hook.');
    return value;
  };
  const agent = () => supertest.agent(there(app));

  async function signIn(email: string, password = PASSWORD): Promise<Agent> {
    const own = agent();
    await own.post('/api/session').send({ email, password }).expect(200);
    return own;
  }

  async function enrol(teamOf: (id: string) => Promise<string>): Promise<TestPerson> {
    passwordHash ??= hashPassword(PASSWORD);
    const id = newId();
    const email = `person-${++count}-${id}@example.test`;
    const name = `Invented person ${count}`;
    const { Person } = database.db.models;
    await Person.create({ id, email, name, passwordHash: await passwordHash, administrator: false, demo: false });
    return { id, email, name, teamId: await teamOf(id), agent: await signIn(email) };
  }

  return {
    get app() {
      return there(app);
    },
    get deps() {
      return there(deps);
    },
    get db() {
      return database.db;
    },
    log,
    nobody: agent,
    signIn,
    person: (kind = 'household') =>
      enrol(async (personId) => {
        const { Team, Membership } = database.db.models;
        const team = await Team.create({ id: newId(), kind, name: `Invented ${kind} ${count}` });
        await Membership.create({ teamId: team.id, personId, role: 'owner' });
        return team.id;
      }),
    member: (of, role) =>
      enrol(async (personId) => {
        await database.db.models.Membership.create({ teamId: of.teamId, personId, role });
        return of.teamId;
      }),
    property: async (owner, fields = {}) => {
      const answer = await owner.agent
        .post('/api/properties')
        .send({ ...SMALL_HOME, ...fields })
        .expect(201);
      return answer.body as Property;
    },
    grant: async (owner, propertyId, to, role, until) => {
      const given = await owner.agent
        .post(`/api/properties/${propertyId}/grants`)
        .send({ email: to.email, role, ...(until && { until: until.toISOString() }) })
        .expect(201);
      const { id } = given.body as { id: string };
      await to.agent.post(`/api/grants/${id}/accept`).send({}).expect(200);
      return id;
    },
  };
}
