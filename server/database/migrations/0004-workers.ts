import type { Migration } from '../migrate.ts';

export const workers: Migration = {
  name: '0004-workers',
  up: (tx) =>
    tx.query(`
      create table workers (
        id text primary key,
        seen_at timestamptz not null
      );
      comment on table workers is 'job workers and when each last reported itself; silent ones lose their jobs';
    `),
};
