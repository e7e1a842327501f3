import path from 'node:path';
import type { Channel } from '../../shared/units/channels.ts';

const folder = path.resolve(import.meta.dirname, '../../samples');

/** What DuckDB is asked of one sample: per civil day of the home's zone, kWh of the channels named (m³ for `gasM3`). */
export interface Asked {
  timeZone: string;
  sql: string;
  channels: (Channel | 'gasM3' | 'relayHours' | 'tankTopMax')[];
  /** Columns of the query that are held to what truly happened, where they are others. */
  truth?: string[];
}

const csv = (name: string, more = ''): string =>
  `read_csv('${folder}/${name}', all_varchar = true, header = true${more})`;

/** Counters: what each stands at on local midnights, and the difference to the next. */
const counters = (name: string): string => `
  with rows as (select cast("timestamp_utc" as timestamptz) as moment, * exclude "timestamp_utc" from ${csv(name)}),
  midnights as (
    select strftime(timezone('Europe/London', moment), '%Y-%m-%d') as day, moment,
      cast("export_total_kwh" as double) as e, cast("import_total_kwh" as double) as i,
      cast("diversion_total_kwh" as double) as d, cast("generation_total_kwh" as double) as g
    from rows where strftime(timezone('Europe/London', moment), '%H:%M') = '00:00')
  select day, lead(e) over (order by moment) - e as export, lead(i) over (order by moment) - i as import,
    lead(d) over (order by moment) - d as diversion, lead(g) over (order by moment) - g as generation
  from midnights qualify lead(e) over (order by moment) is not null order by day`;

/**
 * One query for each sample, written from the file's description and not from any column plan. A power at an instant
 * or of an interval counts for one step of the log; the ends of days lie in the night, where that makes no difference.
 */
export const ASKED: Record<string, Asked> = {
  'wide-minutes.csv': {
    timeZone: 'Europe/London',
    channels: ['export', 'diversion', 'tankTopMax'],
    sql: `select "time"[1:10] as day, sum(cast("export W" as double)) / 60000 as export,
      sum(cast("diversion W" as double)) / 60000 as diversion, max(cast("tank top C" as double)) as tankTopMax
      from ${csv('wide-minutes.csv')} group by 1 order by 1`,
  },
  'registers-utc.csv': {
    timeZone: 'Europe/London',
    channels: ['export', 'import', 'diversion', 'generation'],
    sql: counters('registers-utc.csv'),
  },
  'register-reset.csv': {
    timeZone: 'Europe/London',
    channels: ['export', 'import', 'generation'],
    sql: counters('register-reset.csv'),
  },
  'semicolon-october.csv': {
    timeZone: 'Europe/Berlin',
    channels: ['export', 'import', 'diversion', 'tankTopMax'],
    sql: `select strftime(strptime("Zeit", '%d.%m.%Y %H:%M'), '%Y-%m-%d') as day,
      sum(cast(replace("Einspeisung [kW]", ',', '.') as double)) / 12 as export,
      sum(cast(replace("Netzbezug [kW]", ',', '.') as double)) / 12 as import,
      sum(cast(replace("Heizstab [kW]", ',', '.') as double)) / 12 as diversion,
      max(cast(replace("Speicher oben [°C]", ',', '.') as double)) as tankTopMax
      from ${csv('semicolon-october.csv', ", delim = ';', skip = 3, encoding = 'latin-1'")} group by 1 order by 1`,
  },
  'half-hours.csv': {
    timeZone: 'Europe/London',
    channels: ['export', 'import', 'diversion'],
    sql: `select "period start"[1:10] as day, sum(cast("export kWh" as double)) as export,
      sum(cast("import kWh" as double)) as import, sum(cast("diversion kWh" as double)) as diversion
      from ${csv('half-hours.csv')} group by 1 order by 1`,
  },
  'across-day.csv': {
    timeZone: 'Europe/London',
    channels: ['export'],
    sql: `select date as day, sum(cast(kwh as double)) as export from
      (unpivot ${csv('across-day.csv')} on columns(* exclude (date, quantity)) into name slot value kwh)
      group by 1 order by 1`,
  },
  'long-form.csv': {
    timeZone: 'Europe/London',
    channels: ['export', 'diversion', 'generation', 'tankTopMax'],
    sql: `select strftime(timezone('Europe/London', cast("time" as timestamptz)), '%Y-%m-%d') as day,
      sum(cast(value as double)) filter (name = 'export power') / 4000 as export,
      sum(cast(value as double)) filter (name = 'diversion power') / 4000 as diversion,
      sum(cast(value as double)) filter (name = 'generation power') / 4000 as generation,
      max(cast(value as double)) filter (name = 'tank top') as tankTopMax
      from ${csv('long-form.csv')} group by 1 order by 1`,
  },
  'relay-events.csv': {
    timeZone: 'Europe/London',
    channels: ['relayHours'],
    sql: `with rows as (select cast("time" as timestamptz) as moment, relay from ${csv('relay-events.csv')}),
      spans as (select moment, relay, lead(moment) over (order by moment) as until from rows)
      select strftime(timezone('Europe/London', moment), '%Y-%m-%d') as day,
        sum(epoch(until) - epoch(moment)) filter (relay = 'closed') / 3600 as relayHours
      from spans group by 1 having relayHours is not null order by 1`,
  },
  'gas-register.csv': {
    timeZone: 'Europe/London',
    channels: ['gasM3'],
    sql: `with rows as (select cast(epoch as bigint) as moment, cast("gas meter m3" as double) as m3 from ${csv('gas-register.csv')}),
      midnights as (select moment, m3 from rows where moment % 86400 = 0)
      select strftime(to_timestamp(moment) at time zone 'UTC', '%Y-%m-%d') as day, lead(m3) over (order by moment) - m3 as gasM3
      from midnights qualify lead(m3) over (order by moment) is not null order by 1`,
  },
  'grid-twelve-hours.csv': {
    timeZone: 'Europe/London',
    channels: ['export', 'import', 'diversion'],
    // Within five minutes import and export cancel, so only their difference can be the true one.
    truth: ['net', 'diversion'],
    sql: `with rows as (select strptime("Date and time", '%d/%m/%Y %I:%M %p') as moment,
        cast("Grid kW (import +)" as double) as grid, cast("Immersion heater kW" as double) as heater
        from ${csv('grid-twelve-hours.csv')})
      select strftime(moment, '%Y-%m-%d') as day, sum(greatest(0, -grid)) / 12 as export, sum(greatest(0, grid)) / 12 as import,
        sum(heater) / 12 as diversion, sum(grid) / 12 as net from rows group by 1 order by 1`,
  },
  'tabs-utf16.csv': {
    timeZone: 'Europe/London',
    channels: ['tankTopMax'],
    sql: `select "Time"[1:10] as day, max(cast("Tank top °C" as double)) as tankTopMax
      from ${csv('tabs-utf16.csv', ", delim = '\t', encoding = 'utf-16'")} group by 1 order by 1`,
  },
  'fahrenheit-megajoules.csv': {
    timeZone: 'Australia/Hobart',
    channels: ['export', 'diversion', 'tankTopMax'],
    sql: `with rows as (select cast("interval end" as timestamptz) - interval 15 minutes as starts, * from ${csv('fahrenheit-megajoules.csv')})
      select strftime(timezone('Australia/Hobart', starts), '%Y-%m-%d') as day, sum(cast("export MJ" as double)) / 3.6 as export,
        sum(cast("diversion MJ" as double)) / 3.6 as diversion, max((cast("tank top F" as double) - 32) / 1.8) as tankTopMax
      from rows group by 1 order by 1`,
  },
  'dead-clamp.csv': {
    timeZone: 'Europe/London',
    channels: ['export', 'import', 'diversion'],
    sql: `select strftime(timezone('Europe/London', cast("time" as timestamptz)), '%Y-%m-%d') as day,
      sum(cast("export W" as double)) / 12000 as export, sum(cast("import W" as double)) / 12000 as import,
      sum(cast("diversion W" as double)) / 12000 as diversion from ${csv('dead-clamp.csv')} group by 1 order by 1`,
  },
  'fault-values.csv': {
    timeZone: 'Europe/London',
    channels: ['tankTopMax'],
    sql: `select strftime(timezone('Europe/London', cast("time" as timestamptz)), '%Y-%m-%d') as day,
      max(cast("tank top C" as double)) as tankTopMax from ${csv('fault-values.csv')}
      where "tank top C" <> '' and cast("tank top C" as double) > -100 group by 1 order by 1`,
  },
};
