import type { Migration } from '../migrate.ts';

export const logs: Migration = {
  name: '0010-logs',
  up: (tx) =>
    tx.query(`
      create table original_chunks (
        property_id text not null references properties on delete cascade,
        hash bytea not null,
        data bytea compression lz4 not null,
        arriving boolean not null default true,
        arrived_at timestamptz not null default now(),
        primary key (property_id, hash)
      );
      create index original_chunks_arriving on original_chunks (arrived_at) where arriving;
      comment on table original_chunks is
        'bytes of uploaded files, cut at fixed places and kept once per property; arriving: no original has them yet';

      create table originals (
        property_id text not null references properties on delete cascade,
        hash bytea not null,
        bytes bigint not null,
        chunks bytea[] not null,
        primary key (property_id, hash)
      );
      comment on column originals.hash is 'of the hashes of its chunks';

      create table team_storage (
        team_id text primary key references teams on delete cascade,
        bytes bigint not null
      );
      comment on table team_storage is 'bytes of the originals of the properties that a team keeps, for its quota';

      create table logs (
        property_id text not null references properties on delete cascade,
        n integer not null,
        file_name text not null,
        original bytea not null,
        bytes bigint not null,
        uploaded_at timestamptz not null default now(),
        uploaded_by text references people on delete set null,
        status text not null
          check (status in ('waiting', 'reading', 'asking', 'refused', 'kept', 'failed', 'withdrawn')),
        progress double precision not null default 0,
        revision integer not null default 1,
        rows_read integer not null default 0,
        rows_accepted integer not null default 0,
        rows_rejected integer not null default 0,
        rows_unchanged integer not null default 0,
        from_at timestamptz,
        to_at timestamptz,
        plan jsonb,
        plan_by text check (plan_by in ('person', 'saved', 'found')),
        shape text,
        questions jsonb not null default '[]',
        problems jsonb not null default '[]',
        sample jsonb,
        failure text,
        reach_days integer not null default 2,
        registers boolean not null default false,
        primary key (property_id, n),
        foreign key (property_id, original) references originals
      );
      create index logs_original on logs (property_id, original);
      comment on column logs.n is 'the order of acceptance within the property';
      comment on column logs.revision is 'counts how often it was asked to be read, withdrawn or brought back';
      comment on column logs.reach_days is 'how far, in days, a reading of it can weigh on figures';

      create table upload_keys (
        property_id text not null references properties on delete cascade,
        person_id text not null references people on delete cascade,
        key text not null,
        original bytea not null,
        log integer not null,
        at timestamptz not null default now(),
        primary key (property_id, person_id, key)
      );
      create index upload_keys_at on upload_keys (at);

      create table column_plans (
        property_id text not null references properties on delete cascade,
        shape text not null,
        version integer not null,
        plan jsonb not null,
        log integer not null,
        at timestamptz not null default now(),
        primary key (property_id, shape, version)
      );
      comment on table column_plans is 'plans that a person kept or corrected, for the next file of that shape';

      create table day_blocks (
        property_id text not null references properties on delete cascade,
        utc_day integer not null,
        hash bytea not null,
        data bytea compression lz4 not null,
        primary key (property_id, utc_day, hash)
      );

      create table log_blocks (
        property_id text not null references properties on delete cascade,
        utc_day integer not null,
        log integer not null,
        hash bytea not null,
        primary key (property_id, utc_day, log)
      );
    `),
};
