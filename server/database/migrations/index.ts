import type { Migration } from '../migrate.ts';
import { people } from './0001-people.ts';
import { properties } from './0002-properties.ts';
import { sessions } from './0003-sessions.ts';
import { workers } from './0004-workers.ts';
import { logs } from './0010-logs.ts';
import { days } from './0011-days.ts';

/** Every migration in order. Listed by hand, so that the bundle has them all. */
export const MIGRATIONS: readonly Migration[] = [people, properties, sessions, workers, logs, days];
