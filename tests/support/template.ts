import { randomBytes } from 'node:crypto';
import type { TestProject } from 'vitest/node';
import { openDatabase } from '../../server/database/connection.ts';
import { migrate } from '../../server/database/migrate.ts';
import { startThrowaway } from './postgres.mjs';
import { query, withDatabase } from './query.ts';

declare module 'vitest' {
  interface ProvidedContext {
    /** Leads to the server on which tests make their databases. */
    databaseServer: string;
    /** The migrated, empty database that they are copied from. */
    databaseTemplate: string;
  }
}

/** Migrates one database for all test files of a project to copy. Uses TEST_DATABASE_URL, or starts a server of its own. */
export default async function prepare(project: TestProject): Promise<() => Promise<void>> {
  const given = process.env.TEST_DATABASE_URL;
  const own = given ? null : await startThrowaway();
  const server = given ?? own?.url ?? '';
  const template = `t_${project.name}_${randomBytes(4).toString('hex')}`;
  await query(server, `create database ${template}`);
  const db = openDatabase(withDatabase(server, template));
  await migrate(db);
  await db.close();
  project.provide('databaseServer', server);
  project.provide('databaseTemplate', template);
  return async () => {
    await query(server, `drop database ${template} with (force)`);
    await own?.stop();
  };
}
