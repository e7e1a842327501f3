import { tzOffset } from '@date-fns/tz';
import fc from 'fast-check';
import type { Channel, Kind, Unit } from '../../../../shared/units/channels.ts';

/** Logs written in every way that is supported, with what they say, made without any code of the product. */

interface Quantity {
  channel: Channel;
  kind: Kind;
  unit: Unit;
  headings: string[];
  /** The value of an interval by its hour of the day (0 to 24) and a chance (0 to 1), as a whole number of 10^-digits. */
  value: (hour: number, chance: number, count: number) => number;
  digits: number;
}

const sun = (hour: number): number => Math.max(0, Math.sin(((hour - 6) / 12) * Math.PI));

const QUANTITIES: Quantity[] = [
  {
    channel: 'export',
    kind: 'energy',
    unit: 'kWh',
    digits: 3,
    headings: ['export_kwh', 'Einspeisung (kWh)', 'Energy exported [kWh]', 'Injection (kWh)', 'Teruglevering kWh'],
    value: (h, c) => Math.round(sun(h) * 900 * c),
  },
  {
    channel: 'import',
    kind: 'energy',
    unit: 'kWh',
    digits: 3,
    headings: ['import_kwh', 'Bezug (kWh)', 'Grid import kWh', 'Soutirage (kWh)', 'Prelievo [kWh]', 'Afname kWh'],
    value: (h, c) => Math.round(60 + 400 * c * (1 - sun(h))),
  },
  {
    channel: 'export',
    kind: 'power',
    unit: 'W',
    digits: 0,
    headings: ['export_w', 'Einspeisung W', 'Export power (W)'],
    value: (h, c) => Math.round(sun(h) * 3500 * c),
  },
  {
    channel: 'diversion',
    kind: 'power',
    unit: 'W',
    digits: 0,
    headings: ['diversion W', 'Immersion heater (W)', 'Heizstab [W]', 'Diverted power W'],
    value: (h, c) => (c > 0.5 ? Math.round(sun(h) * 3000) : 0),
  },
  {
    channel: 'generation',
    kind: 'power',
    unit: 'kW',
    digits: 3,
    headings: ['PV power kW', 'Solar generation (kW)', 'Erzeugung kW', 'Produzione kW'],
    value: (h, c) => Math.round(sun(h) * 4000 * (0.5 + c / 2)),
  },
  {
    channel: 'tankTop',
    kind: 'level',
    unit: 'C',
    digits: 1,
    headings: ['tank_top_c', 'Speicher oben °C', 'Cylinder top (°C)', 'Ballon haut °C'],
    value: (h, c) => Math.round(500 + 60 * sun(h) + 5 * c),
  },
  {
    channel: 'import',
    kind: 'register',
    unit: 'kWh',
    digits: 2,
    headings: ['import register kWh', 'Zählerstand Bezug kWh', 'Import total (kWh)'],
    value: (_, c, n) => 812340 + n * 3 + (c > 0.5 ? 1 : 0),
  },
  {
    channel: 'gas',
    kind: 'register',
    unit: 'm3',
    digits: 2,
    headings: ['gas meter m3', 'Gaszähler (m³)', 'Compteur gaz m3'],
    value: (_, __, n) => 40211 + Math.floor(n / 3),
  },
];

const pad = (n: number, width = 2): string => String(n).padStart(width, '0');
const MONTHS = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec'];

interface TimeForm {
  name: string;
  headings: string[][];
  cells: (local: Date, utc: number) => string[];
  /** Whether the text says the instant by itself. */
  absolute: boolean;
}

const dmy = (d: Date, s: string): string => [pad(d.getUTCDate()), pad(d.getUTCMonth() + 1), d.getUTCFullYear()].join(s);
const mdy = (d: Date, s: string): string => [pad(d.getUTCMonth() + 1), pad(d.getUTCDate()), d.getUTCFullYear()].join(s);
const clock = (d: Date): string => d.toISOString().slice(11, 16);
const half = (d: Date): string =>
  `${d.getUTCHours() % 12 || 12}:${pad(d.getUTCMinutes())} ${d.getUTCHours() < 12 ? 'AM' : 'PM'}`;

const TIME_FORMS: TimeForm[] = [
  {
    name: 'iso',
    headings: [['time'], ['Zeitstempel'], ['timestamp']],
    cells: (d) => [d.toISOString().slice(0, 19)],
    absolute: false,
  },
  {
    name: 'iso blank',
    headings: [['date time'], ['Horodatage']],
    cells: (d) => [d.toISOString().slice(0, 16).replace('T', ' ')],
    absolute: false,
  },
  {
    name: 'iso Z',
    headings: [['time_utc'], ['time']],
    cells: (_, utc) => [new Date(utc).toISOString().slice(0, 19) + 'Z'],
    absolute: true,
  },
  {
    name: 'iso offset',
    headings: [['timestamp']],
    cells: (d, utc) => {
      const minutes = Math.round((d.getTime() - utc) / 60_000);
      const size = Math.abs(minutes);
      return [
        `${d.toISOString().slice(0, 19)}${minutes < 0 ? '-' : '+'}${pad(Math.floor(size / 60))}:${pad(size % 60)}`,
      ];
    },
    absolute: true,
  },
  {
    name: 'points',
    headings: [['Datum/Zeit'], ['Time']],
    cells: (d) => [`${dmy(d, '.')} ${clock(d)}`],
    absolute: false,
  },
  {
    name: 'points in two',
    headings: [
      ['Datum', 'Uhrzeit'],
      ['Date', 'Time'],
    ],
    cells: (d) => [dmy(d, '.'), clock(d)],
    absolute: false,
  },
  {
    name: 'slashes, day first',
    headings: [['Date'], ['Fecha y hora']],
    cells: (d) => [`${dmy(d, '/')} ${clock(d)}:00`],
    absolute: false,
  },
  {
    name: 'slashes, month first',
    headings: [['Date and time']],
    cells: (d) => [`${mdy(d, '/')} ${half(d)}`],
    absolute: false,
  },
  {
    name: 'year first',
    headings: [['When']],
    cells: (d) => [`${d.toISOString().slice(0, 10).replaceAll('-', '/')} ${clock(d)}`],
    absolute: false,
  },
  {
    name: 'month by name',
    headings: [['Date']],
    cells: (d) => [`${d.getUTCDate()} ${MONTHS[d.getUTCMonth()]} ${d.getUTCFullYear()} ${clock(d)}`],
    absolute: false,
  },
  {
    name: 'digits',
    headings: [['timestamp']],
    cells: (d) => [d.toISOString().slice(0, 16).replace(/[-T:]/g, '')],
    absolute: false,
  },
  {
    name: 'epoch seconds',
    headings: [['epoch'], ['unix time']],
    cells: (_, utc) => [String(utc / 1000)],
    absolute: true,
  },
  { name: 'epoch milliseconds', headings: [['timestamp']], cells: (_, utc) => [String(utc)], absolute: true },
  {
    name: 'two-digit years',
    headings: [['Date']],
    cells: (d) => [`${pad(d.getUTCDate())}/${pad(d.getUTCMonth() + 1)}/${pad(d.getUTCFullYear() % 100)} ${clock(d)}`],
    absolute: false,
  },
];

/** What a written log says. */
export interface Said {
  channel: Channel;
  kind: Kind;
  unit: Unit;
  /** Instant and value. */
  readings: [number, number][];
}

export interface Written {
  form: string;
  bytes: Uint8Array;
  timeZone: string;
  said: Said[];
  text: string;
}

const encode = (text: string, encoding: string): Uint8Array => {
  switch (encoding) {
    case 'utf-16le':
      return Buffer.from('\ufeff' + text, 'utf16le');
    case 'utf-16 without mark':
      return Buffer.from(text, 'utf16le');
    case 'windows-1252':
      return Buffer.from(text, 'latin1');
    case 'utf-8 with mark':
      return Buffer.from('\ufeff' + text);
    default:
      return Buffer.from(text);
  }
};

const local = (zone: string, utc: number): Date => new Date(utc + tzOffset(zone, new Date(utc)) * 60_000);

/** Any log in any supported way of writing. */
export const writtenLogs: fc.Arbitrary<Written> = fc
  .record({
    quantities: fc.uniqueArray(fc.constantFrom(...QUANTITIES), {
      minLength: 1,
      maxLength: 4,
      selector: ({ channel }) => channel,
    }),
    heading: fc.nat(10),
    form: fc.constantFrom(...TIME_FORMS),
    zone: fc.constantFrom('Europe/London', 'Europe/Berlin', 'Australia/Brisbane', 'Asia/Kathmandu', 'UTC', '+10:00'),
    start: fc.constantFrom('2025-01-03', '2025-03-28', '2025-06-11', '2025-10-24', '2024-02-27'),
    days: fc.integer({ min: 2, max: 6 }),
    minutes: fc.constantFrom(5, 15, 30, 60),
    marks: fc.constantFrom([',', '.'], [';', ','], [';', '.'], ['\t', '.'], ['\t', ','], ['|', '.']),
    encoding: fc.constantFrom('utf-8', 'utf-8 with mark', 'utf-16le', 'utf-16 without mark', 'windows-1252'),
    lineEnd: fc.constantFrom('\n', '\r\n', '\r'),
    preamble: fc.constantFrom([], ['Log of an invented home'], ['Site;Home', 'Period;March', '']),
    footer: fc.constantFrom([], ['Total'], ['']),
    missing: fc.constantFrom('', '-', 'n/a', 'NaN'),
    shape: fc.constantFrom('wide', 'wide', 'wide', 'long', 'across'),
    newestFirst: fc.boolean(),
    quoted: fc.boolean(),
    seed: fc.nat(1_000_000),
  })
  .map((w): Written => {
    let state = w.seed + 1;
    const chance = (): number => {
      state = (state * 48_271) % 2_147_483_647;
      return state / 2_147_483_647;
    };
    const [delimiter, decimal] = w.marks;
    const minutes = w.shape === 'across' ? 30 : w.minutes;
    const quantities =
      w.shape === 'across' ? w.quantities.filter(({ kind }) => kind === 'energy').slice(0, 1) : w.quantities;
    if (quantities.length === 0) quantities.push(QUANTITIES[0]);
    const midnight = Date.parse(`${w.start}T00:00Z`);
    const from = midnight - tzOffset(w.zone, new Date(midnight)) * 60_000;
    const instants: number[] = [];
    for (let utc = from; local(w.zone, utc).getTime() < midnight + w.days * 86_400_000; utc += minutes * 60_000)
      instants.push(utc);
    const number = (mantissa: number, digits: number): string =>
      (mantissa / 10 ** digits).toFixed(digits).replace('.', decimal);
    const cell = (text: string): string => (w.quoted || text.includes(delimiter) ? `"${text}"` : text);
    const said = quantities.map(({ channel, kind, unit }): Said => ({ channel, kind, unit, readings: [] }));
    const names = quantities.map(({ headings }) => headings[w.heading % headings.length]);
    const rows: string[][] = [];
    const timeHeading = w.form.headings[w.heading % w.form.headings.length];
    let header: string[];
    let form = w.form.name;
    if (w.shape === 'across') {
      form = 'across';
      const perDay = 48;
      header = [
        'date',
        'quantity',
        ...Array.from({ length: perDay }, (_, i) => `${pad(Math.floor(i / 2))}:${i % 2 ? '30' : '00'}`),
      ];
      const days = new Map<string, string[]>();
      instants.forEach((utc, n) => {
        const at = local(w.zone, utc);
        const [{ value, digits }] = quantities;
        const mantissa = value(at.getUTCHours() + at.getUTCMinutes() / 60, chance(), n);
        said[0].readings.push([utc, mantissa / 10 ** digits]);
        const day = at.toISOString().slice(0, 10);
        days.set(day, [...(days.get(day) ?? []), number(mantissa, digits)]);
      });
      // Days of 25 hours have two columns more.
      if ([...days.values()].some((values) => values.length > perDay)) header.push('24:00', '24:30');
      for (const [day, values] of days) rows.push([day, names[0], ...values]);
    } else {
      header = w.shape === 'long' ? [...timeHeading, 'name', 'value'] : [...timeHeading, ...names];
      instants.forEach((utc, n) => {
        const at = local(w.zone, utc);
        const hour = at.getUTCHours() + at.getUTCMinutes() / 60;
        const times = w.form.cells(at, utc);
        const values = quantities.map(({ value, digits }, q) => {
          const mantissa = value(hour, chance(), n);
          if (chance() < 0.02) return w.missing;
          said[q].readings.push([utc, mantissa / 10 ** digits]);
          return number(mantissa, digits);
        });
        if (w.shape === 'long') values.forEach((value, q) => rows.push([...times, names[q], value]));
        else rows.push([...times, ...values]);
      });
    }
    if (w.newestFirst) rows.reverse();
    const lines = [...w.preamble, ...[header, ...rows].map((cells) => cells.map(cell).join(delimiter)), ...w.footer];
    const text = lines.join(w.lineEnd) + w.lineEnd;
    return {
      form: `${w.shape}, ${form}, ${w.encoding}`,
      bytes: encode(text, w.encoding),
      timeZone: w.zone,
      said,
      text,
    };
  });
