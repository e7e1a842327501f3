import type { Migration } from '../migrate.ts';

export const days: Migration = {
  name: '0011-days',
  up: (tx) =>
    tx.query(`
      create table days (
        property_id text not null references properties on delete cascade,
        day date not null,
        hours double precision not null,
        complete boolean not null,
        export_kwh double precision,
        import_kwh double precision,
        generation_kwh double precision,
        heater_kwh double precision,
        bought_heat_kwh double precision,
        diverted_kwh double precision,
        surplus_caught double precision,
        useful_heat_kwh double precision,
        fuel_heat_kwh double precision,
        draw_heat_kwh double precision,
        standing_loss_kwh double precision,
        store_change_kwh double precision,
        residual_kwh double precision,
        solar_fraction double precision,
        litres_at_40 double precision,
        gas_displaced_kwh double precision,
        gas_displaced_m3 double precision,
        fuel_displaced_litres double precision,
        fuel_measured_kwh double precision,
        fuel_measured_m3 double precision,
        net_saving double precision,
        co2_saved_kg double precision,
        missed_sun_kwh double precision,
        missed_sun_value double precision,
        primary key (property_id, day)
      );
      comment on table days is 'civil days with readings, derived from the day blocks; narrow, for sums over many homes';

      create table day_details (
        property_id text not null references properties on delete cascade,
        day date not null,
        detail jsonb compression lz4 not null,
        primary key (property_id, day)
      );
      comment on table day_details is 'what else is known of a day: coverage, terms, tank, on what each figure rests';

      create table property_work (
        property_id text not null references properties on delete cascade,
        id bigint generated always as identity,
        what text not null check (what in ('withdraw', 'derive')),
        log integer,
        primary key (property_id, id),
        check ((what = 'withdraw') = (log is not null))
      );
      comment on table property_work is 'changes that the figures do not show yet; whoever reads figures waits for them';
    `),
};
