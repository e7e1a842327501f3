import type { Logger } from 'pino';
import type { Config } from './config.ts';
import type { Database } from './database/connection.ts';

/** What the edges of the server are made of; passed in, never imported. */
export interface Deps {
  config: Config;
  db: Database;
  logger: Logger;
  /** The clock. */
  now: () => Date;
}
