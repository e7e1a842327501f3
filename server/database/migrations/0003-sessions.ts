import type { Migration } from '../migrate.ts';

export const sessions: Migration = {
  name: '0003-sessions',
  up: (tx) =>
    tx.query(`
      create table sessions (
        sid varchar primary key,
        sess json not null,
        expire timestamp(6) not null
      );
      create index sessions_expire on sessions (expire);
      create index sessions_person on sessions ((sess -> 'passport' ->> 'user'));

      create table tokens (
        id text primary key,
        person_id text not null references people on delete cascade,
        name text not null,
        hash bytea not null unique,
        created_at timestamptz not null default now(),
        last_used_at timestamptz
      );
      create index tokens_person on tokens (person_id);

      create table known_devices (
        person_id text not null references people on delete cascade,
        hash bytea not null,
        used_at timestamptz not null default now(),
        primary key (person_id, hash)
      );

      create unlogged table counters (
        key text primary key,
        hits integer not null,
        ends_at timestamptz not null
      );
      create index counters_ends on counters (ends_at);
      comment on table counters is 'limits in a window of time; may be lost in a crash';

      create table secrets (
        name text primary key,
        value text not null
      );
    `),
};
