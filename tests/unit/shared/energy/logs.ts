import type { Home } from '../../../../shared/energy/home.ts';
import type { ColumnMeaning, LogLayer } from '../../../../shared/energy/layer.ts';
import type { Channel, Kind, Unit } from '../../../../shared/units/channels.ts';

export const DAY = 86_400_000;
export const HOUR = 3_600_000;
export const MINUTE = 60_000;

export type Row = readonly [t: number, v: number];

const UNIT: Record<Kind, Unit> = { power: 'W', energy: 'kWh', register: 'kWh', level: 'C', state: 'state' };

export interface Written extends Partial<ColumnMeaning> {
  channel: Channel;
  kind: Kind;
  /** Digits after the decimal mark; values are rounded to them. */
  scale?: number;
  rows: readonly Row[];
}

function median(rows: readonly Row[]): number {
  const steps = rows.slice(1).map(([t], i) => t - rows[i][0]);
  return steps.sort((a, b) => a - b)[Math.floor(steps.length / 2)] / 1000 || 0;
}

/** One log of columns that may have different instants, as its layers: a row that a column lacks is missing. */
export function logOf(log: number, ...columns: Written[]): LogLayer[] {
  const days = new Map<number, Set<number>>();
  for (const { rows } of columns)
    for (const [t] of rows) {
      const day = Math.floor(t / DAY);
      if (!days.has(day)) days.set(day, new Set());
      days.get(day)?.add(t);
    }
  return [...days].map(([utcDay, set]) => {
    const instants = [...set].sort((a, b) => a - b);
    return {
      log,
      utcDay,
      instants: Float64Array.from(instants),
      columns: columns.map(({ rows, scale = 3, ...meaning }) => {
        const at = new Map(rows);
        return {
          unit: UNIT[meaning.kind],
          sign: 1 as const,
          factor: 1,
          stamp: 'start' as const,
          hold: null,
          sleeps: null,
          intervalSeconds: median(rows),
          ...meaning,
          scale,
          values: Float64Array.from(instants, (t) => {
            const value = at.get(t);
            return value === undefined ? NaN : Math.round(value * 10 ** scale);
          }),
        };
      }),
    };
  });
}

export function utc(text: string): number {
  return Date.parse(`${text.length === 10 ? `${text}T00:00` : text}Z`);
}

/** Rows at equal steps, their values by a function of the hours since the first. */
export function every(from: number, to: number, step: number, value: (hours: number) => number): Row[] {
  const rows: Row[] = [];
  for (let t = from; t < to; t += step) rows.push([t, value((t - from) / HOUR)]);
  return rows;
}

/** An invented home with next to nothing recorded. */
export function homeIn(timeZone: string, change: Partial<Home> = {}): Home {
  return {
    timeZone,
    country: null,
    latitude: null,
    longitude: null,
    ready: { time: '18:00', temperatureC: 50 },
    systems: [{ from: '2020-01-01', cylinder: { volumeLitres: 210 }, boiler: { fuel: 'gas' } }],
    tariffs: [],
    ...change,
  };
}
