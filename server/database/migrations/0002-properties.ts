import type { Migration } from '../migrate.ts';

export const properties: Migration = {
  name: '0002-properties',
  up: (tx) =>
    tx.query(`
      create table properties (
        id text primary key check (id ~ '^[a-z0-9]{16}$'),
        name text not null,
        time_zone text not null,
        country text,
        latitude double precision,
        longitude double precision,
        ready_time text,
        ready_temperature_c double precision,
        team_id text not null references teams,
        demo boolean not null default false,
        first_day date,
        last_day date,
        created_by text references people on delete set null,
        created_at timestamptz not null default now()
      );
      comment on column properties.ready_time is 'null: the default is taken, and said so';
      comment on column properties.first_day is 'the first civil day with readings, kept by the logs';

      create table system_records (
        property_id text not null references properties on delete cascade,
        from_date date not null,
        record jsonb not null,
        created_by text references people on delete set null,
        created_at timestamptz not null default now(),
        primary key (property_id, from_date)
      );

      create table tariffs (
        property_id text not null references properties on delete cascade,
        from_date date not null,
        record jsonb not null,
        created_by text references people on delete set null,
        created_at timestamptz not null default now(),
        primary key (property_id, from_date)
      );

      create table grants (
        property_id text not null references properties on delete cascade,
        id text not null,
        role text not null check (role in ('occupier', 'installer', 'landlord')),
        email text,
        team_id text references teams on delete cascade,
        given_by text references people on delete set null,
        given_as text check (given_as in ('occupier', 'installer', 'landlord')),
        given_at timestamptz not null default now(),
        accepted_at timestamptz,
        starts_at timestamptz not null default now(),
        ends_at timestamptz,
        withdrawn_at timestamptz,
        traces_consent_at timestamptz,
        primary key (property_id, id),
        check (email is null or email = lower(email)),
        check ((accepted_at is null) = (team_id is null)),
        check (traces_consent_at is null or role = 'occupier')
      );
      create index grants_team on grants (team_id, property_id);
      create index grants_email on grants (email) where accepted_at is null;
      comment on column grants.given_as is 'the role at the property of who gave it; null for the first grant';
      comment on column grants.traces_consent_at is 'since when this occupier lets landlords see traces; null: not';

      create table trail (
        property_id text not null references properties on delete cascade,
        id bigint generated always as identity,
        at timestamptz not null default now(),
        person_id text references people on delete set null,
        act text not null,
        about jsonb not null default '{}',
        primary key (property_id, id)
      );
      comment on table trail is 'what people did to access, properties and logs';
    `),
};
