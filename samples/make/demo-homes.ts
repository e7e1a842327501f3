import { civilDate, DAY, dayNumber, MINUTE, ZoneClock } from './civil.ts';
import type { Fault } from './faults.ts';
import { like, TYPICAL, type Home } from './home.ts';
import { coarse, counter, isLevel, measure, type Measured, type MeasuredName } from './measure.ts';
import { simulate } from './simulate.ts';

/** A demo person; each signs in with the demo password. */
export type DemoPerson = 'occupier' | 'installer' | 'landlord';

/** One column of a demo log: heading, where it comes from, and how a column plan names it. */
interface DemoColumn {
  heading: string;
  from: MeasuredName;
  kind: 'power' | 'energy' | 'level';
  unit: 'W' | 'kWh' | 'C';
}

/** A log of a demo home. Files of one log follow each other, from one civil date to another. */
export interface DemoLog {
  /** Begins the file's name; what follows is its first and last date. */
  name: string;
  plan: Record<string, unknown>;
  rows(home: Home, measured: Measured): IterableIterator<[instant: number, line: string]>;
  header: string;
  /** A counter shows its last value once more at the end, so that no step is lost between two files. */
  closed: boolean;
}

export interface DemoHome {
  property: Record<string, unknown> & { name: string; timeZone: string };
  owner: DemoPerson;
  /** Who else is given access, and as what. */
  shared: { with: DemoPerson; role: 'occupier' | 'installer' | 'landlord' }[];
  home: Home;
  /** The first date of logs for one whose logs end on `yesterday`. */
  firstDate(yesterday: string): string;
  faults(first: string, last: string): Fault[];
  logs: DemoLog[];
}

const earlier = (date: string, days: number): string => civilDate(dayNumber(date) - days);

/** A wide log every so many minutes; powers as means from the stamp on, energies by their interval's beginning, UTC or local stamps. */
function wide(name: string, every: number, zone: string, columns: DemoColumn[]): DemoLog {
  const times = columns.map((column) => (column.kind === 'energy' ? every / 60_000 : 1));
  const digits = columns.map((column) => ({ power: 0, energy: 3, level: 1 })[column.kind]);
  const utc = zone === 'UTC';
  return {
    name,
    header: ['time', ...columns.map((column) => column.heading)].join(','),
    closed: false,
    plan: {
      encoding: 'utf-8',
      delimiter: ',',
      decimal: '.',
      headerLine: 1,
      time: { columns: ['time'], format: 'iso', zone, stamp: 'start' },
      columns: columns.map(({ heading, from, kind, unit }) => ({
        column: heading,
        channel: from,
        kind,
        unit,
        sign: 1,
      })),
    },
    *rows(_home, measured) {
      const clock = new ZoneClock(zone);
      const values = columns.map(({ from }) => {
        const minutes = measured.channels[from];
        if (!minutes) throw new RangeError(`${name}: this home has no ${from}`);
        return coarse(minutes, every, isLevel(from));
      });
      const count = values[0].length;
      let day = NaN;
      let dateText = '';
      for (let i = 0; i < count; i++) {
        const instant = measured.start + i * every * MINUTE;
        const wall = utc ? instant : clock.wall(instant);
        const today = Math.floor(wall / DAY);
        if (today !== day) {
          day = today;
          dateText = civilDate(day);
        }
        const minute = Math.floor((wall - day * DAY) / MINUTE);
        const hour = Math.floor(minute / 60);
        const rest = minute % 60;
        let line = `${dateText}T${hour < 10 ? '0' : ''}${hour}:${rest < 10 ? '0' : ''}${rest}:00${utc ? 'Z' : ''}`;
        for (let c = 0; c < values.length; c++) {
          const value = values[c][i];
          line += Number.isNaN(value) ? ',' : `,${written(value * times[c], digits[c])}`;
        }
        yield [instant, line];
      }
    },
  };
}

function written(value: number, digits: number): string {
  return digits === 0 ? String(Math.round(value)) : value.toFixed(digits);
}

/** The hot-water gas meter's counter in m³, every half an hour, in UTC. */
const GAS: DemoLog = {
  name: 'gas-meter',
  header: 'time,gas meter m3',
  closed: true,
  plan: {
    encoding: 'utf-8',
    delimiter: ',',
    decimal: '.',
    headerLine: 1,
    time: { columns: ['time'], format: 'iso', zone: 'UTC', stamp: 'instant' },
    columns: [{ column: 'gas meter m3', channel: 'gas', kind: 'register', unit: 'm3', sign: 1 }],
  },
  *rows(home, measured) {
    const gas = measured.channels.gas;
    if (!gas) throw new RangeError('this home has no gas');
    const perKwh = 3.6 / (1.02264 * (home.boiler?.calorificMJ ?? 39.5));
    const held = counter(coarse(gas, 30, false), 30, 2310 / perKwh, 0.01 / perKwh);
    for (let i = 0; i < held.length; i++) {
      const instant = measured.start + i * 30 * MINUTE;
      yield [instant, `${new Date(instant).toISOString().slice(0, 19)}Z,${(held[i] * perKwh).toFixed(2)}`];
    }
  },
};

/** The relay, a row only when it changes and one at each local midnight, in UTC. */
const RELAY: DemoLog = {
  name: 'backup-relay',
  header: 'time,relay',
  closed: true,
  plan: {
    encoding: 'utf-8',
    delimiter: ',',
    decimal: '.',
    headerLine: 1,
    time: { columns: ['time'], format: 'iso', zone: 'UTC', stamp: 'instant' },
    columns: [
      {
        column: 'relay',
        channel: 'relay',
        kind: 'state',
        unit: 'state',
        sign: 1,
        hold: 'toNext',
        on: ['closed'],
        off: ['open'],
      },
    ],
  },
  *rows(home, measured) {
    const clock = new ZoneClock(home.timeZone);
    const relay = measured.channels.relay ?? new Float64Array();
    const row = (instant: number, state: number): [number, string] => [
      instant,
      `${new Date(instant).toISOString().slice(0, 19)}Z,${state === 1 ? 'closed' : 'open'}`,
    ];
    let day = NaN;
    for (let i = 0; i < relay.length; i++) {
      const instant = measured.start + i * MINUTE;
      const changed = i === 0 || relay[i] !== relay[i - 1];
      if (!changed && i % 1440 > 90 && i % 1440 < 1350) continue;
      const today = clock.dayOf(instant);
      if (!changed && today === day) continue;
      day = today;
      yield row(instant, relay[i]);
    }
    yield row(measured.start + relay.length * MINUTE, relay[relay.length - 1]);
  },
};

const W = (heading: string, from: MeasuredName): DemoColumn => ({ heading, from, kind: 'power', unit: 'W' });
const KWH = (heading: string, from: MeasuredName): DemoColumn => ({ heading, from, kind: 'energy', unit: 'kWh' });
const C = (heading: string, from: MeasuredName): DemoColumn => ({ heading, from, kind: 'level', unit: 'C' });

const FOXGLOVE: DemoHome = {
  owner: 'occupier',
  shared: [
    { with: 'installer', role: 'installer' },
    { with: 'landlord', role: 'landlord' },
  ],
  home: like(TYPICAL, { seed: 41, people: { holidayDays: 9 } }),
  // A whole year and the days of this month: the first of the month a year before.
  firstDate: (yesterday) => `${Number(yesterday.slice(0, 4)) - 1}${yesterday.slice(4, 8)}01`,
  /** Each spring the timer was set to run before the sun for some weeks, and put right again. */
  faults: (first, last) => {
    const years = [Number(first.slice(0, 4)), Number(last.slice(0, 4))];
    return [...new Set(years)].map((year) => ({
      kind: 'backupBeforeSun',
      from: `${year}-04-07`,
      to: `${year}-05-12`,
      start: '05:30',
      end: '07:30',
      targetC: 58,
    }));
  },
  property: {
    name: 'Invented home, Foxglove Lane (demo)',
    timeZone: 'Europe/London',
    country: 'GB',
    latitude: 52.4,
    longitude: -1.5,
    ready: { time: '18:00', temperatureC: 50 },
    system: {
      cylinder: {
        volumeLitres: 210,
        declaredLossKwhPerDay: 1.73,
        sensors: [
          { channel: 'tankTop', height: 0.85 },
          { channel: 'tankBottom', height: 0.22 },
        ],
      },
      heaters: [{ ratedKw: 3, ratedVolts: 240, position: 'lower', thermostatC: 63, viaDiverter: true }],
      boiler: {
        fuel: 'gas',
        kind: 'condensing-regular',
        efficiency: 0.74,
        efficiencyIs: 'hotWater',
        calorificValue: 39.5,
        ratedKw: 15,
      },
      panels: [{ kwp: 3.9, tiltDegrees: 32, azimuthDegrees: 185 }],
      phases: 1,
      gasMeterCovers: 'hotWater',
      relay: { onMeans: 'the boiler may heat the cylinder', windows: [{ start: '16:30', end: '18:30' }], targetC: 58 },
      exportLoggedBy: 'ownMeter',
      diversionIs: 'metered',
      occupants: 3,
      floorAreaM2: 92,
      note: 'Invented home with invented data.',
    },
    tariff: {
      currency: 'GBP',
      fuelPerKwh: 0.066,
      importPerKwh: 0.268,
      exportPerKwh: 0.055,
      exportPayment: 'metered',
    },
  },
  logs: [
    wide('minutes', 1, 'UTC', [
      W('export W', 'export'),
      W('import W', 'import'),
      W('generation W', 'generation'),
      W('diversion W', 'diversion'),
      C('tank top C', 'tankTop'),
      C('tank bottom C', 'tankBottom'),
      C('cupboard C', 'ambient'),
    ]),
    GAS,
    RELAY,
  ],
};

const HARBOUR: DemoHome = {
  owner: 'landlord',
  shared: [{ with: 'installer', role: 'installer' }],
  home: like(TYPICAL, {
    seed: 42,
    latitude: 50.4,
    longitude: -4.1,
    panels: [{ kwp: 3.2, tilt: 38, azimuth: 205 }],
    house: { occupants: 2.2, washDays: [1, 5], kettles: 4 },
    cylinder: { litres: 180, uaWPerK: 1.9, sensors: [{ channel: 'tankTop', height: 0.8, offsetK: 0.3 }] },
    people: { holidayDays: 0, awayWeekends: 0.05 },
  }),
  firstDate: (yesterday) => earlier(yesterday, 89),
  /** The clamp came loose after 76 days: at the first loading, the last two weeks. */
  faults: (first) => [{ kind: 'clampDead', from: civilDate(dayNumber(first) + 76) }],
  property: {
    name: 'Invented house, 4 Harbour Terrace (demo)',
    timeZone: 'Europe/London',
    country: 'GB',
    latitude: 50.4,
    longitude: -4.1,
    system: {
      cylinder: {
        volumeLitres: 180,
        insulation: { kind: 'foam', mm: 50 },
        sensors: [{ channel: 'tankTop', height: 0.8 }],
      },
      heaters: [{ ratedKw: 3, ratedVolts: 240, position: 'lower', thermostatC: 63, viaDiverter: true }],
      boiler: { fuel: 'gas', kind: 'condensing-regular' },
      panels: [{ kwp: 3.2, tiltDegrees: 38, azimuthDegrees: 205 }],
      phases: 1,
      relay: { windows: [{ start: '16:30', end: '18:30' }], targetC: 58 },
      exportLoggedBy: 'ownMeter',
      diversionIs: 'metered',
      occupants: 2,
      note: 'Invented house with invented data.',
    },
    tariff: { currency: 'GBP', fuelPerKwh: 0.066, importPerKwh: 0.268, exportPerKwh: 0.055, exportPayment: 'deemed' },
  },
  logs: [
    wide('five-minutes', 5, 'UTC', [
      W('export W', 'export'),
      W('import W', 'import'),
      W('diversion W', 'diversion'),
      C('tank top C', 'tankTop'),
    ]),
  ],
};

const PINAR: DemoHome = {
  owner: 'landlord',
  shared: [],
  home: like(TYPICAL, {
    seed: 43,
    timeZone: 'Europe/Madrid',
    latitude: 39.6,
    longitude: 2.9,
    clarity: 0.7,
    mainsVolts: 232,
    coldOffsetK: 5,
    panels: [{ kwp: 2.8, tilt: 20, azimuth: 170 }],
    heaters: [
      { position: 'lower', ratedW: 2000, ratedVolts: 230, low: 0.12, high: 0.2, thermostatC: 65, hysteresisK: 5 },
    ],
    cylinder: {
      litres: 150,
      sensors: [
        { channel: 'tankTop', height: 0.85, offsetK: 0 },
        { channel: 'tankBottom', height: 0.25, offsetK: 0.2 },
      ],
    },
    house: { occupants: 2.4, roomsWPerK: 80 },
    people: { litresAt40PerHead: 55, holidayDays: 0, awayWeekends: 0.15 },
    ambient: { meanC: 22, seasonK: 4 },
    relay: { windows: [{ start: '18:00', end: '20:30' }] },
  }),
  firstDate: (yesterday) => earlier(yesterday, 209),
  faults: () => [],
  property: {
    name: 'Invented cottage, Camino del Pinar (demo)',
    timeZone: 'Europe/Madrid',
    country: 'ES',
    latitude: 39.6,
    longitude: 2.9,
    ready: { time: '20:00', temperatureC: 48 },
    system: {
      cylinder: {
        volumeLitres: 150,
        declaredLossKwhPerDay: 1.7,
        sensors: [
          { channel: 'tankTop', height: 0.85 },
          { channel: 'tankBottom', height: 0.25 },
        ],
      },
      heaters: [{ ratedKw: 2, ratedVolts: 230, position: 'lower', thermostatC: 65, viaDiverter: true }],
      boiler: { fuel: 'lpg', kind: 'condensing-regular' },
      panels: [{ kwp: 2.8, tiltDegrees: 20, azimuthDegrees: 170 }],
      phases: 1,
      relay: { windows: [{ start: '18:00', end: '20:30' }], targetC: 58 },
      exportLoggedBy: 'ownMeter',
      diversionIs: 'metered',
      occupants: 2,
      note: 'Invented cottage with invented data.',
    },
    tariff: { currency: 'EUR', fuelPerKwh: 0.12, importPerKwh: 0.21, exportPerKwh: 0.06, exportPayment: 'none' },
  },
  logs: [
    wide('half-hours', 30, 'Europe/Madrid', [
      KWH('export kWh', 'export'),
      KWH('import kWh', 'import'),
      KWH('diversion kWh', 'diversion'),
      C('tank top C', 'tankTop'),
      C('tank bottom C', 'tankBottom'),
    ]),
  ],
};

/** The demo homes; the first is the largest. All of them, and all of their data, are invented. */
export const DEMO_HOMES: readonly DemoHome[] = [FOXGLOVE, HARBOUR, PINAR];

/** Lines gathered before they are turned into bytes. */
const LINES_AT_ONCE = 2000;

/**
 * The logs of a demo home for some civil dates, both included, as bytes in pieces. The home is run from the first date
 * of its logs, so that a later part agrees with an earlier one.
 * @param first the first date of the home's logs; @param from first date wanted; @param last last date wanted
 */
export function demoFiles(demo: DemoHome, first: string, from: string, last: string): Map<DemoLog, Buffer[]> {
  const end = civilDate(dayNumber(last) + 1);
  const measured = measure(simulate(demo.home, first, end, demo.faults(first, last)));
  const clock = new ZoneClock(demo.home.timeZone);
  const begins = clock.startOfDay(dayNumber(from));
  const ends = clock.startOfDay(dayNumber(end));
  const files = new Map<DemoLog, Buffer[]>();
  for (const log of demo.logs) {
    const pieces: Buffer[] = [];
    let text = `${log.header}\n`;
    let lines = 1;
    for (const [instant, line] of log.rows(demo.home, measured)) {
      if (instant < begins || instant > ends || (instant === ends && !log.closed)) continue;
      text += `${line}\n`;
      if (++lines % LINES_AT_ONCE === 0) {
        pieces.push(Buffer.from(text));
        text = '';
      }
    }
    pieces.push(Buffer.from(text));
    files.set(log, pieces);
  }
  return files;
}
