import { randomBytes } from 'node:crypto';
import { afterAll, beforeAll, inject } from 'vitest';
import { openDatabase } from '../../server/database/connection.ts';
import type { Database } from '../../server/database/connection.ts';
import { query, withDatabase } from './query.ts';

export interface TestDatabase {
  /** For processes that connect by themselves. */
  readonly url: string;
  /** Open from the first test to the last. */
  readonly db: Database;
}

/**
 * Gives the test file (or the `describe` it is called in) a database of its own, migrated and empty, and takes
 * it away after the last test. Its fields can be read inside tests and hooks only.
 */
export function useDatabase(): TestDatabase {
  let url: string | null = null;
  let db: Database | null = null;
  const name = `t_${process.env.VITEST_POOL_ID ?? 0}_${randomBytes(4).toString('hex')}`;

  beforeAll(async () => {
    const server = inject('databaseServer');
    await query(server, `create database ${name} template ${inject('databaseTemplate')}`);
    url = withDatabase(server, name);
    db = openDatabase(url);
  });
  afterAll(async () => {
    await db?.close();
    await query(inject('databaseServer'), `drop database if exists ${name} with (force)`);
  });

  return {
    get url() {
      return url ?? tooEarly();
    },
    get db() {
      return db ?? tooEarly();
    },
  };
}

function tooEarly(): never {
  throw new Error('The database is there from beforeAll on: read it inside a test or hook.');
}
