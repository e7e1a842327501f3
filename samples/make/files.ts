import { MINUTE, ZoneClock } from './civil.ts';
import type { Fault } from './faults.ts';
import { like, TYPICAL, type Home } from './home.ts';
import { coarse, counter, isLevel, measure, type Measured, type MeasuredName } from './measure.ts';
import { simulate } from './simulate.ts';
import { digits, STAMPS, table, type Column } from './table.ts';

/** The invented home of the samples, in Great Britain. */
export const BRITISH = like(TYPICAL, {
  seed: 21,
  cylinder: {
    sensors: [
      { channel: 'tankTop', height: 0.85, offsetK: 0.2 },
      { channel: 'tankMiddle', height: 0.5, offsetK: 0 },
      { channel: 'tankBottom', height: 0.2, offsetK: -0.3 },
    ],
  },
  people: { holidayDays: 0 },
});

/** The same household in a continental zone. */
export const CONTINENTAL = like(BRITISH, { seed: 22, timeZone: 'Europe/Berlin', latitude: 52, longitude: 7.6 });

/** And in the south. */
export const SOUTHERN = like(BRITISH, {
  seed: 23,
  timeZone: 'Australia/Hobart',
  latitude: -42.9,
  longitude: 147.3,
  clarity: 0.3,
  panels: [{ kwp: 3.2, tilt: 25, azimuth: 5 }],
});

/** What one home wrote from one date to another, seen every `every` minutes. */
export class Logged {
  readonly clock: ZoneClock;
  readonly measured: Measured;
  readonly rows: number;

  constructor(
    readonly home: Home,
    from: string,
    to: string,
    readonly every: number,
    faults: Fault[] = [],
  ) {
    this.clock = new ZoneClock(home.timeZone);
    this.measured = measure(simulate(home, from, to, faults));
    this.rows = Math.floor(this.measured.minutes / every);
  }

  /** The instant at which interval i begins. */
  instant(i: number): number {
    return this.measured.start + i * this.every * MINUTE;
  }

  values(channel: MeasuredName): Float64Array {
    const values = this.measured.channels[channel];
    if (!values) throw new RangeError(`this home has no ${channel}`);
    return coarse(values, this.every, isLevel(channel));
  }

  register(channel: MeasuredName, startKwh: number, stepKwh: number): Float64Array {
    const resets = (this.measured.resets[channel] ?? []).map((minute) => Math.round(minute / this.every));
    return counter(this.values(channel), this.every, startKwh, stepKwh, resets);
  }

  /** A time column; `shift` intervals later than the beginning of each (1: the end). */
  time(heading: string, stamp: (clock: ZoneClock, instant: number) => string, shift = 0): Column {
    return { heading, cell: (i) => stamp(this.clock, this.instant(i + shift)) };
  }

  column(heading: string, channel: MeasuredName, count: number, times = 1, add = 0): Column {
    return { heading, cell: digits(this.values(channel), count, times, add) };
  }
}

/** kWh of an interval from its mean W. */
const kwhOf = (every: number): number => every / 60_000;
/** m³ from kWh at 39.5 MJ/m³ and the volume correction 1.02264. */
const M3_PER_KWH = 3.6 / (1.02264 * 39.5);

function wideMinutes(log: Logged): string {
  return table(
    log.time('time', STAMPS.isoOffset),
    [
      log.column('export W', 'export', 0),
      log.column('diversion W', 'diversion', 0),
      log.column('tank top C', 'tankTop', 1),
      log.column('tank bottom C', 'tankBottom', 1),
    ],
    log.rows,
  );
}

function registersUtc(log: Logged): string {
  const column = (heading: string, channel: MeasuredName, start: number): Column => ({
    heading,
    cell: digits(log.register(channel, start, 0.001), 3),
  });
  return table(
    log.time('timestamp_utc', STAMPS.isoUtc),
    [
      column('import_total_kwh', 'import', 8123.4),
      column('export_total_kwh', 'export', 5310.25),
      column('diversion_total_kwh', 'diversion', 2044.7),
      column('generation_total_kwh', 'generation', 11872),
    ],
    log.rows + 1,
  );
}

function semicolonOctober(log: Logged): string {
  const rows = table(
    log.time('Zeit', STAMPS.dayFirst),
    [
      log.column('Einspeisung [kW]', 'export', 3, 0.001),
      log.column('Netzbezug [kW]', 'import', 3, 0.001),
      log.column('Heizstab [kW]', 'diversion', 3, 0.001),
      log.column('Speicher oben [°C]', 'tankTop', 1),
    ],
    log.rows,
    { delimiter: ';', decimal: ',', end: '\r\n' },
  );
  return ['Messprotokoll;Musterhaus (erfundene Daten)', 'Zeitraum;20.10.2025 - 02.11.2025', '', rows].join('\r\n');
}

function halfHours(log: Logged): string {
  return table(
    log.time('period start', STAMPS.local),
    [
      log.column('export kWh', 'export', 3, kwhOf(30)),
      log.column('import kWh', 'import', 3, kwhOf(30)),
      log.column('diversion kWh', 'diversion', 3, kwhOf(30)),
    ],
    log.rows,
  );
}

function acrossDay(log: Logged): string {
  const cell = digits(log.values('export'), 3, kwhOf(30));
  const times = Array.from({ length: 48 }, (_, i) => `${String(i >> 1).padStart(2, '0')}:${i % 2 ? '30' : '00'}`);
  const lines = [['date', 'quantity', ...times].join(',')];
  for (let day = 0; day < log.rows / 48; day++) {
    const cells = times.map((_, i) => cell(day * 48 + i));
    lines.push([STAMPS.local(log.clock, log.instant(day * 48)).slice(0, 10), 'export kWh', ...cells].join(','));
  }
  return lines.join('\n') + '\n';
}

function longForm(log: Logged): string {
  const series: [string, Column][] = [
    ['export power', log.column('W', 'export', 0)],
    ['diversion power', log.column('W', 'diversion', 0)],
    ['generation power', log.column('W', 'generation', 0)],
    ['tank top', log.column('C', 'tankTop', 1)],
    ['ambient', log.column('C', 'ambient', 1)],
  ];
  const lines = ['time,name,value,unit'];
  for (let i = 0; i < log.rows; i++) {
    for (const [name, column] of series)
      lines.push([STAMPS.isoUtc(log.clock, log.instant(i)), name, column.cell(i), column.heading].join(','));
  }
  return lines.join('\n') + '\n';
}

function relayEvents(log: Logged): string {
  const relay = log.values('relay');
  const lines = ['time,relay'];
  for (let i = 0; i < log.rows; i++) {
    if (i === 0 || relay[i] !== relay[i - 1])
      lines.push(`${STAMPS.isoOffset(log.clock, log.instant(i))},${relay[i] === 1 ? 'closed' : 'open'}`);
  }
  return lines.join('\n') + '\n';
}

function gasRegister(log: Logged): string {
  const kwh = log.register('gas', 4000, 0.01 / M3_PER_KWH);
  return table(
    log.time('epoch', STAMPS.epochSeconds),
    [{ heading: 'gas meter m3', cell: digits(kwh, 2, M3_PER_KWH) }],
    log.rows + 1,
  );
}

function gridTwelveHours(log: Logged): string {
  return table(
    log.time('Date and time', STAMPS.twelveHours),
    [log.column('Grid kW (import +)', 'grid', 3, 0.001), log.column('Immersion heater kW', 'diversion', 3, 0.001)],
    log.rows,
  );
}

function tabsUtf16(log: Logged): string {
  return table(
    log.time('Time', STAMPS.local),
    [
      log.column('Tank top °C', 'tankTop', 1),
      log.column('Tank middle °C', 'tankMiddle', 1),
      log.column('Tank bottom °C', 'tankBottom', 1),
      log.column('Ambient °C', 'ambient', 1),
    ],
    log.rows,
    { delimiter: '\t', end: '\r\n' },
  );
}

function fahrenheitMegajoules(log: Logged): string {
  return table(
    log.time('interval end', STAMPS.isoOffset, 1),
    [
      log.column('export MJ', 'export', 3, kwhOf(15) * 3.6),
      log.column('diversion MJ', 'diversion', 3, kwhOf(15) * 3.6),
      { heading: 'tank top F', cell: digits(Float64Array.from([...log.values('tankTop').slice(1), NaN]), 1, 1.8, 32) },
    ],
    log.rows,
  );
}

function deadClamp(log: Logged): string {
  return table(
    log.time('time', STAMPS.isoUtc),
    [
      log.column('export W', 'export', 0),
      log.column('import W', 'import', 0),
      log.column('diversion W', 'diversion', 0),
      log.column('tank top C', 'tankTop', 1),
    ],
    log.rows,
  );
}

function faultValues(): string {
  const from = '2025-04-22';
  const log = new Logged(BRITISH, '2025-04-21', '2025-04-25', 5, [
    { kind: 'sensorFault', channel: 'tankTop', value: -127, share: 0.04, from },
    { kind: 'sensorFault', channel: 'tankBottom', value: 85, share: 0.01, from },
    { kind: 'logHoles', everyDays: 3, hours: 3, from: '2025-04-23' },
  ]);
  return table(
    log.time('time', STAMPS.isoUtc),
    [
      log.column('diversion W', 'diversion', 0),
      log.column('tank top C', 'tankTop', 1),
      log.column('tank bottom C', 'tankBottom', 1),
    ],
    log.rows,
  );
}

/** A byte-order mark and two bytes for each character, the lower first. */
function utf16(text: string): Buffer {
  return Buffer.from(`\uFEFF${text}`, 'utf16le');
}

/** One sample log: whose, when, how often, what is broken, and how it is written. */
export interface Sample {
  home: Home;
  from: string;
  to: string;
  /** Minutes between rows; a relay's events are looked for at this step. */
  every: number;
  faults?: Fault[];
  write(log: Logged): string;
  encode?(text: string): Buffer;
}

/** Every sample log by file name. */
export const SAMPLES: Record<string, Sample> = {
  'wide-minutes.csv': { home: BRITISH, from: '2025-05-05', to: '2025-05-10', every: 1, write: wideMinutes },
  'registers-utc.csv': { home: BRITISH, from: '2025-08-04', to: '2025-08-14', every: 10, write: registersUtc },
  'semicolon-october.csv': {
    home: CONTINENTAL,
    from: '2025-10-20',
    to: '2025-11-03',
    every: 5,
    write: semicolonOctober,
    encode: (text) => Buffer.from(text, 'latin1'),
  },
  'half-hours.csv': { home: BRITISH, from: '2025-03-17', to: '2025-04-07', every: 30, write: halfHours },
  'across-day.csv': { home: BRITISH, from: '2025-06-02', to: '2025-06-30', every: 30, write: acrossDay },
  'long-form.csv': { home: BRITISH, from: '2025-08-04', to: '2025-08-11', every: 15, write: longForm },
  'relay-events.csv': { home: BRITISH, from: '2025-11-03', to: '2025-11-17', every: 1, write: relayEvents },
  'gas-register.csv': { home: BRITISH, from: '2025-11-03', to: '2025-11-17', every: 15, write: gasRegister },
  'grid-twelve-hours.csv': { home: BRITISH, from: '2025-07-14', to: '2025-07-21', every: 5, write: gridTwelveHours },
  'tabs-utf16.csv': {
    home: BRITISH,
    from: '2025-09-08',
    to: '2025-09-15',
    every: 10,
    write: tabsUtf16,
    encode: utf16,
  },
  'fahrenheit-megajoules.csv': {
    home: SOUTHERN,
    from: '2025-01-06',
    to: '2025-01-20',
    every: 15,
    write: fahrenheitMegajoules,
  },
  'dead-clamp.csv': {
    home: BRITISH,
    from: '2025-06-02',
    to: '2025-06-16',
    every: 5,
    faults: [{ kind: 'clampDead', from: '2025-06-09' }],
    write: deadClamp,
  },
  'fault-values.csv': {
    home: BRITISH,
    from: '2025-04-21',
    to: '2025-04-25',
    every: 5,
    faults: [
      { kind: 'sensorFault', channel: 'tankTop', value: -127, share: 0.04, from: '2025-04-22' },
      { kind: 'sensorFault', channel: 'tankBottom', value: 85, share: 0.01, from: '2025-04-22' },
      { kind: 'logHoles', everyDays: 3, hours: 3, from: '2025-04-23' },
    ],
    write: faultValues,
  },
  'register-reset.csv': {
    home: BRITISH,
    from: '2025-08-18',
    to: '2025-08-28',
    every: 10,
    faults: [{ kind: 'registerReset', channel: 'diversion', from: '2025-08-23' }],
    write: registersUtc,
  },
};

/** The bytes of one sample. */
export function sampleBytes({ home, from, to, every, faults, write, encode }: Sample): Buffer {
  const text = write(new Logged(home, from, to, every, faults));
  return encode ? encode(text) : Buffer.from(text);
}
