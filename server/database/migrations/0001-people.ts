import type { Migration } from '../migrate.ts';

export const people: Migration = {
  name: '0001-people',
  up: (tx) =>
    tx.query(`
      create table people (
        id text primary key,
        email text not null unique check (email = lower(email)),
        name text not null,
        password_hash text,
        administrator boolean not null default false,
        demo boolean not null default false,
        created_at timestamptz not null default now()
      );

      create table teams (
        id text primary key,
        kind text not null check (kind in ('household', 'firm', 'landlord')),
        name text not null,
        created_at timestamptz not null default now()
      );

      create table memberships (
        team_id text not null references teams on delete cascade,
        person_id text not null references people on delete cascade,
        role text not null check (role in ('owner', 'member', 'reader')),
        created_at timestamptz not null default now(),
        primary key (team_id, person_id)
      );
      create index memberships_person on memberships (person_id);
    `),
};
