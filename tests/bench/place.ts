import { randomBytes } from 'node:crypto';
import { setImmediate as turn } from 'node:timers/promises';
import pino from 'pino';
import type { Person } from '../../server/accounts/accounts.service.ts';
import { newId } from '../../server/accounts/ids.ts';
import { readConfig } from '../../server/config.ts';
import { openDatabase } from '../../server/database/connection.ts';
import { migrate } from '../../server/database/migrate.ts';
import type { Deps } from '../../server/deps.ts';
import { readLogJob } from '../../server/ingest/ingest.service.ts';
import { acceptLog, writeOriginal } from '../../server/logs/logs.service.ts';
import type { ColumnPlan } from '../../shared/api/plan.ts';
import { query, withDatabase } from '../support/query.ts';
import { YEAR_PLAN } from './year.ts';

const SERVER = process.env.BENCH_SERVER ?? '';

/** A migrated database of its own on the benchmark's server. */
export async function newDatabase(): Promise<string> {
  const name = `bench_${randomBytes(4).toString('hex')}`;
  await query(SERVER, `create database ${name}`);
  const url = withDatabase(SERVER, name);
  const db = openDatabase(url);
  await migrate(db);
  await db.close();
  return url;
}

/** What the services need, on a database of its own, with one person and as many properties as are asked for. */
export interface Place {
  deps: Deps;
  person: Person;
  teamId: string;
  property(): Promise<string>;
  /** Bytes in, original kept and log queued: what the web process does. */
  upload(propertyId: string, csv: Buffer, plan?: ColumnPlan | null): Promise<{ n: number; same: boolean }>;
  /** Kept original to committed blocks and days: what the job does. */
  ingest(propertyId: string, n: number): Promise<void>;
  close(): Promise<void>;
}

export async function newPlace(url?: string): Promise<Place> {
  const address = url ?? (await newDatabase());
  const config = readConfig({ DATABASE_URL: address, NODE_ENV: 'production' });
  const db = openDatabase(address);
  const deps: Deps = { config, db, logger: pino({ level: 'silent' }), now: () => new Date() };
  const personId = newId();
  const teamId = newId();
  const email = `${personId}@example.test`;
  await db.query(`insert into people (id, email, name) values ($1, $2, 'Invented person')`, [personId, email]);
  await db.query(`insert into teams (id, kind, name) values ($1, 'household', 'Invented household')`, [teamId]);
  await db.query(`insert into memberships (team_id, person_id, role) values ($1, $2, 'owner')`, [teamId, personId]);
  const person = { id: personId, email, name: 'Invented person', administrator: false, demo: false } as Person;
  return {
    deps,
    person,
    teamId,
    property: async () => {
      const id = newId();
      await db.query(
        `insert into properties (id, name, time_zone, country, team_id, created_by)
         values ($1, 'Invented home', 'Europe/London', 'GB', $2, $3)`,
        [id, teamId, personId],
      );
      await db.query(
        `insert into system_records (property_id, from_date, record) values ($1, '1970-01-01', $2::jsonb)`,
        [id, JSON.stringify({ cylinder: { volumeLitres: 210 }, boiler: { fuel: 'gas' } })],
      );
      await db.query(
        `insert into grants (property_id, id, role, team_id, accepted_at) values ($1, $2, 'occupier', $3, now())`,
        [id, newId(8), teamId],
      );
      return id;
    },
    upload: async (propertyId, csv, plan = YEAR_PLAN) => {
      const arrived = await writeOriginal(deps, propertyId, pieces(csv));
      const { log, same } = await acceptLog(deps, person, propertyId, {
        fileName: 'year.csv',
        arrived,
        plan,
        key: null,
      });
      return { n: log.n, same };
    },
    ingest: async (propertyId, n) => {
      const outcome = await readLogJob(deps, { propertyId, n }, { signal: new AbortController().signal });
      if (outcome !== 'done') throw new Error(`The log was not read: ${outcome}`);
    },
    close: () => db.close(),
  };
}

/** A file as it comes from a socket. */
export async function* pieces(csv: Buffer): AsyncGenerator<Buffer> {
  for (let at = 0; at < csv.length; at += 65_536) {
    yield csv.subarray(at, at + 65_536);
    if (at % (1 << 20) === 0) await turn();
  }
}

export async function statusOf({ deps }: Place, propertyId: string, n: number) {
  const [row] = await deps.db.query<{ status: string; rows: number }>(
    'select status, rows_accepted as rows from logs where property_id = $1 and n = $2',
    [propertyId, n],
  );
  return row;
}

/** Kilowatt hours of a property's days. */
export async function kwhOf({ deps }: Place, propertyId: string) {
  const [row] = await deps.db.query<{ export: number; import: number; diversion: number; days: number }>(
    `select sum(export_kwh) as export, sum(import_kwh) as import, sum(heater_kwh) as diversion, count(*)::int as days
     from days where property_id = $1`,
    [propertyId],
  );
  return row;
}
