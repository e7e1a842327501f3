import { runMigrations } from 'graphile-worker';
import { Umzug } from 'umzug';
import type { Database, Tx } from './connection.ts';
import { MIGRATIONS } from './migrations/index.ts';

/** One step of the schema. Names ascend; a step that was released is never edited. */
export interface Migration {
  name: string;
  up(tx: Tx): Promise<unknown>;
}

/** Any constant does: every process of one database must use the same. */
const LOCK = 7_209_311;

/**
 * Brings the schema up to date, the job queue's own included. Each migration runs in one transaction
 * together with the note that it ran; an advisory lock makes a second process wait and find nothing to do.
 */
export async function migrate(db: Database): Promise<void> {
  const holder = await db.pool.connect();
  try {
    await holder.query('select pg_advisory_lock($1)', [LOCK]);
    await holder.query(
      'create table if not exists migrations (name text primary key, at timestamptz not null default now())',
    );
    await umzug(db).up();
    await runMigrations({ pgPool: db.pool });
    await holder.query('select pg_advisory_unlock($1)', [LOCK]);
  } finally {
    holder.release(true);
  }
}

/** The names of migrations that have not run; `null` if the database has none of our tables. */
export async function pendingMigrations(db: Database): Promise<string[] | null> {
  const [table] = await db.query<{ there: boolean }>(`select to_regclass('migrations') is not null as there`);
  if (!table?.there) return null;
  const done = new Set((await db.query<{ name: string }>('select name from migrations')).map((row) => row.name));
  return MIGRATIONS.map((migration) => migration.name).filter((name) => !done.has(name));
}

function umzug(db: Database) {
  return new Umzug({
    logger: undefined,
    migrations: MIGRATIONS.map((migration) => ({
      name: migration.name,
      up: () =>
        db.transaction(async (tx) => {
          await migration.up(tx);
          await tx.query('insert into migrations (name) values ($1)', [migration.name]);
        }),
    })),
    storage: {
      executed: async () =>
        (await db.query<{ name: string }>('select name from migrations order by name')).map((row) => row.name),
      logMigration: async () => undefined,
      unlogMigration: () => Promise.reject(new Error('Migrations only go forward.')),
    },
  });
}

/** What a crash-safe database must have on; anything else is refused at the start. */
const DURABLE = ['fsync', 'full_page_writes', 'synchronous_commit'] as const;

/**
 * Throws an error that names the setting when the database could lose what it acknowledged.
 */
export async function assertDurable(db: Database): Promise<void> {
  for (const name of DURABLE) {
    const [row] = await db.query<{ value: string }>('select current_setting($1) as value', [name]);
    if (row?.value === 'off')
      throw new Error(
        `PostgreSQL runs with ${name} = off: after a crash, logs that were acknowledged could be gone. ` +
          `Set ${name} = on in postgresql.conf (or for this role and database) and start again.`,
      );
  }
}
