import { setTimeout as wait } from 'node:timers/promises';
import { readConfig } from './config.ts';
import { openDatabase } from './database/connection.ts';
import type { Database } from './database/connection.ts';
import { assertDurable, migrate } from './database/migrate.ts';
import type { Deps } from './deps.ts';
import { makeLogger } from './http/logs.ts';
import { asProblem } from './http/problems.ts';

/** How long a starting process waits for its database before it gives up. */
const PATIENCE_MS = 30_000;

/**
 * What both processes do before their own work: read the settings, reach the database, refuse one that
 * could lose data, bring the schema up to date. On failure it says why and ends the process.
 */
export async function prepared(name: string): Promise<{ deps: Deps; failed: (error: unknown) => never }> {
  try {
    const config = readConfig();
    const logger = makeLogger(config.logLevel).child({ process: name });
    const db = openDatabase(config.databaseUrl, (error) => logger.warn({ err: error }, 'a database connection broke'));
    await reachable(db);
    await assertDurable(db);
    await migrate(db);
    return { deps: { config, db, logger, now: () => new Date() }, failed };
  } catch (error) {
    return failed(error);
  }
}

function failed(error: unknown): never {
  process.stderr.write(`${error instanceof Error ? error.message : String(error)}\n`);
  process.exit(1);
}

async function reachable(db: Database): Promise<void> {
  const until = Date.now() + PATIENCE_MS;
  for (;;) {
    try {
      await db.query('select 1');
      return;
    } catch (error) {
      if (asProblem(error).code !== 'unavailable' || Date.now() > until)
        throw new Error(`The database cannot be used: ${error instanceof Error ? error.message : String(error)}`, {
          cause: error,
        });
      await wait(500);
    }
  }
}
