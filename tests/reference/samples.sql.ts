import path from 'node:path';
import type { Channel } from '../../shared/units/channels.ts';

const folder = path.resolve(import.meta.dirname, '../../samples');

/**
 * How a power between two rows is taken: held from its row on (what the simulation means), or straight to the next row
 * (what a reader must take who is told nothing but instants). With the latter nothing follows the last row.
 */
export type Between = 'held' | 'straight';

/** What DuckDB is asked of one sample: per civil day of the home's zone, a column for each thing named. Energies in kWh. */
export interface Asked {
  timeZone: string;
  sql(between: Between): string;
  asks: (Channel | 'gasM3' | 'relayHours' | 'tankTopMax')[];
  /** Columns that are held to what truly happened, where they are others. */
  truth?: string[];
}

const csv = (name: string, more = ''): string =>
  `read_csv('${folder}/${name}', all_varchar = true, header = true${more})`;
const number = (heading: string): string => `cast("${heading}" as double)`;
const london = (instant: string): string =>
  `strftime(timezone('Europe/London', cast(${instant} as timestamptz)), '%Y-%m-%d')`;

interface Powers {
  /** What the rows are read from, and how a row's place in time and its civil day are written. */
  rows: string;
  moment: string;
  day: string;
  /** Minutes between rows. */
  every: number;
  /** W by channel. */
  watts: Partial<Record<Channel | 'net', string>>;
  tankTop?: string;
}

/** Daily kWh of powers at equal steps; a row at midnight belongs to the day that begins. */
const powers =
  ({ rows, moment, day, every, watts, tankTop }: Powers): Asked['sql'] =>
  (between) => {
    const names = Object.keys(watts);
    const next = (name: string): string =>
      between === 'held' ? name : `(${name} + lead(${name}) over (order by moment)) / 2`;
    return `with rows as (
        select ${moment} as moment, ${day} as day, ${tankTop ?? 'null'} as top,
          ${names.map((name) => `${watts[name as Channel]} as ${name}`).join(', ')} from ${rows}),
      means as (select day, top, ${names.map((name) => `${next(name)} as ${name}`).join(', ')} from rows)
      select day, max(top) as tankTopMax,
        ${names.map((name) => `sum(${name}) * ${every} / 60000 as ${name}`).join(', ')}
      from means group by day order by day`;
  };

/** Daily kWh of counters in UTC: what each stands at on local midnights, and the difference to the next. */
const counters = (name: string): string => `
  with rows as (select cast("timestamp_utc" as timestamptz) as moment, * exclude "timestamp_utc" from ${csv(name)}),
  midnights as (
    select strftime(timezone('Europe/London', moment), '%Y-%m-%d') as day, moment,
      ${number('export_total_kwh')} as e, ${number('import_total_kwh')} as i,
      ${number('diversion_total_kwh')} as d, ${number('generation_total_kwh')} as g
    from rows where strftime(timezone('Europe/London', moment), '%H:%M') = '00:00')
  select day, lead(e) over (order by moment) - e as export, lead(i) over (order by moment) - i as import,
    lead(d) over (order by moment) - d as diversion, lead(g) over (order by moment) - g as generation
  from midnights qualify lead(e) over (order by moment) is not null order by day`;

const comma = (heading: string): string => `cast(replace("${heading}", ',', '.') as double)`;

/** One query for each sample, written from the file's description and not from any column plan. */
export const ASKED: Record<string, Asked> = {
  'wide-minutes.csv': {
    timeZone: 'Europe/London',
    asks: ['export', 'diversion', 'tankTopMax'],
    sql: powers({
      rows: csv('wide-minutes.csv'),
      moment: 'cast("time" as timestamptz)',
      day: '"time"[1:10]',
      every: 1,
      watts: { export: number('export W'), diversion: number('diversion W') },
      tankTop: number('tank top C'),
    }),
  },
  'registers-utc.csv': {
    timeZone: 'Europe/London',
    asks: ['export', 'import', 'diversion', 'generation'],
    sql: () => counters('registers-utc.csv'),
  },
  'register-reset.csv': {
    timeZone: 'Europe/London',
    asks: ['export', 'import', 'generation'],
    sql: () => counters('register-reset.csv'),
  },
  'semicolon-october.csv': {
    timeZone: 'Europe/Berlin',
    asks: ['export', 'import', 'diversion', 'tankTopMax'],
    sql: powers({
      // The file's own order tells the two passes of the repeated hour apart.
      rows: `(select row_number() over () as place, * from ${csv('semicolon-october.csv', ", delim = ';', skip = 3, encoding = 'latin-1'")})`,
      moment: 'place',
      day: `strftime(strptime("Zeit", '%d.%m.%Y %H:%M'), '%Y-%m-%d')`,
      every: 5,
      watts: {
        export: `1000 * ${comma('Einspeisung [kW]')}`,
        import: `1000 * ${comma('Netzbezug [kW]')}`,
        diversion: `1000 * ${comma('Heizstab [kW]')}`,
      },
      tankTop: comma('Speicher oben [°C]'),
    }),
  },
  'half-hours.csv': {
    timeZone: 'Europe/London',
    asks: ['export', 'import', 'diversion'],
    sql: () => `select "period start"[1:10] as day, sum(${number('export kWh')}) as export,
      sum(${number('import kWh')}) as import, sum(${number('diversion kWh')}) as diversion
      from ${csv('half-hours.csv')} group by 1 order by 1`,
  },
  'across-day.csv': {
    timeZone: 'Europe/London',
    asks: ['export'],
    sql: () => `select date as day, sum(cast(kwh as double)) as export from
      (unpivot ${csv('across-day.csv')} on columns(* exclude (date, quantity)) into name slot value kwh)
      group by 1 order by 1`,
  },
  'long-form.csv': {
    timeZone: 'Europe/London',
    asks: ['export', 'diversion', 'generation', 'tankTopMax'],
    sql: powers({
      rows: `(select "time", max(cast(value as double)) filter (name = 'export power') as e,
        max(cast(value as double)) filter (name = 'diversion power') as d,
        max(cast(value as double)) filter (name = 'generation power') as g,
        max(cast(value as double)) filter (name = 'tank top') as t from ${csv('long-form.csv')} group by 1)`,
      moment: 'cast("time" as timestamptz)',
      day: london('"time"'),
      every: 15,
      watts: { export: 'e', diversion: 'd', generation: 'g' },
      tankTop: 't',
    }),
  },
  'relay-events.csv': {
    timeZone: 'Europe/London',
    asks: ['relayHours'],
    sql: () => `with rows as (select cast("time" as timestamptz) as moment, relay from ${csv('relay-events.csv')}),
      spans as (select moment, relay, lead(moment) over (order by moment) as until from rows)
      select strftime(timezone('Europe/London', moment), '%Y-%m-%d') as day,
        sum(epoch(until) - epoch(moment)) filter (relay = 'closed') / 3600 as relayHours
      from spans group by 1 having relayHours is not null order by 1`,
  },
  'gas-register.csv': {
    timeZone: 'Europe/London',
    asks: ['gasM3'],
    sql: () => `with rows as (
        select cast(epoch as bigint) as moment, ${number('gas meter m3')} as m3 from ${csv('gas-register.csv')}),
      midnights as (select moment, m3 from rows where moment % 86400 = 0)
      select strftime(to_timestamp(moment) at time zone 'UTC', '%Y-%m-%d') as day,
        lead(m3) over (order by moment) - m3 as gasM3
      from midnights qualify lead(m3) over (order by moment) is not null order by 1`,
  },
  'grid-twelve-hours.csv': {
    timeZone: 'Europe/London',
    asks: ['export', 'import', 'diversion'],
    // Within five minutes import and export cancel, so only their difference can be the true one.
    truth: ['net', 'diversion'],
    sql: powers({
      rows: csv('grid-twelve-hours.csv'),
      moment: `strptime("Date and time", '%d/%m/%Y %I:%M %p')`,
      day: `strftime(strptime("Date and time", '%d/%m/%Y %I:%M %p'), '%Y-%m-%d')`,
      every: 5,
      watts: {
        export: `greatest(0, -1000 * ${number('Grid kW (import +)')})`,
        import: `greatest(0, 1000 * ${number('Grid kW (import +)')})`,
        net: `1000 * ${number('Grid kW (import +)')}`,
        diversion: `1000 * ${number('Immersion heater kW')}`,
      },
    }),
  },
  'tabs-utf16.csv': {
    timeZone: 'Europe/London',
    asks: ['tankTopMax'],
    sql: () => `select "Time"[1:10] as day, max(${number('Tank top °C')}) as tankTopMax
      from ${csv('tabs-utf16.csv', ", delim = '\t', encoding = 'utf-16'")} group by 1 order by 1`,
  },
  'fahrenheit-megajoules.csv': {
    timeZone: 'Australia/Hobart',
    asks: ['export', 'diversion', 'tankTopMax'],
    sql: () => `with rows as (select cast("interval end" as timestamptz) as ends, * from ${csv('fahrenheit-megajoules.csv')}),
      energies as (
        select strftime(timezone('Australia/Hobart', ends - interval 15 minutes), '%Y-%m-%d') as day,
          sum(${number('export MJ')}) / 3.6 as export, sum(${number('diversion MJ')}) / 3.6 as diversion
        from rows group by 1),
      levels as (
        select strftime(timezone('Australia/Hobart', ends), '%Y-%m-%d') as day, max((${number('tank top F')} - 32) / 1.8) as tankTopMax
        from rows group by 1)
      select * from energies join levels using (day) order by day`,
  },
  'dead-clamp.csv': {
    timeZone: 'Europe/London',
    asks: ['export', 'import', 'diversion', 'tankTopMax'],
    sql: powers({
      rows: csv('dead-clamp.csv'),
      moment: 'cast("time" as timestamptz)',
      day: london('"time"'),
      every: 5,
      watts: { export: number('export W'), import: number('import W'), diversion: number('diversion W') },
      tankTop: number('tank top C'),
    }),
  },
  'fault-values.csv': {
    timeZone: 'Europe/London',
    asks: ['tankTopMax'],
    // −127 is never a temperature of water.
    sql: () => `select ${london('"time"')} as day, max(${number('tank top C')}) as tankTopMax
      from ${csv('fault-values.csv')} where ${number('tank top C')} > -100 group by 1 order by 1`,
  },
};
