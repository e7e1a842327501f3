import type { ColumnPlan } from '../../shared/api/plan.ts';

const DAY_MS = 86_400_000;

/** How the file of `yearFile` is read. */
export const YEAR_PLAN: ColumnPlan = {
  encoding: 'utf-8',
  delimiter: ',',
  decimal: '.',
  headerLine: 1,
  time: { columns: ['time'], format: 'iso', zone: 'UTC', stamp: 'start' },
  columns: [
    { column: 'export_w', channel: 'export', kind: 'power', unit: 'W', sign: 1 },
    { column: 'import_w', channel: 'import', kind: 'power', unit: 'W', sign: 1 },
    { column: 'heater_w', channel: 'diversion', kind: 'power', unit: 'W', sign: 1 },
    { column: 'tank_top_c', channel: 'tankTop', kind: 'level', unit: 'C', sign: 1 },
  ],
};

/** Numbers from 0 to 1 that look like chance and are the same at every call (a linear congruential generator). */
function chance(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
    return state / 2 ** 32;
  };
}

export interface BenchFile {
  csv: Buffer;
  rows: number;
  /** The sum of a column's means over their minutes, kWh, added up while writing: what must come out. */
  kwh: { export: number; import: number; diversion: number };
}

/**
 * An invented home by the minute: base load with kettles, a bell of sun under passing clouds, a diverter that takes
 * surplus until the cylinder is hot. Four columns, ISO stamps in UTC.
 *
 * @param from first UTC day, `YYYY-MM-DD`
 * @param days how many
 * @param seed another home or another year for another seed
 */
export function minuteFile(from: string, days: number, seed = 1): BenchFile {
  const start = Date.parse(`${from}T00:00:00Z`);
  const next = chance(seed);
  const pad = (n: number) => (n < 10 ? `0${n}` : String(n));
  const clock = Array.from({ length: 1440 }, (_, m) => `T${pad(Math.floor(m / 60))}:${pad(m % 60)}:00Z,`);
  const parts: Buffer[] = [Buffer.from('time,export_w,import_w,heater_w,tank_top_c\n')];
  const tenths = { export: 0, import: 0, diversion: 0 };
  let tank = 500;
  let cloud = 0.7;
  let load = 2500;
  let kettle = 0;
  for (let day = 0; day < days; day++) {
    const date = new Date(start + day * DAY_MS).toISOString().slice(0, 10);
    const season = Math.cos((((day % 365) - 172) / 365) * 2 * Math.PI);
    const half = 240 + 120 * (1 + season) * 0.9;
    const peak = 14_000 + 12_000 * (1 + season);
    const lines: string[] = [];
    for (let minute = 0; minute < 1440; minute++) {
      cloud = Math.min(1, Math.max(0.1, cloud + (next() - 0.5) * 0.12));
      load = Math.min(9000, Math.max(1200, load + (next() - 0.5) * 260));
      if (kettle > 0) kettle--;
      else if (minute > 380 && next() < 0.004) kettle = 3;
      const x = (minute - 725) / half;
      const sun = x > -1 && x < 1 ? peak * (1 - x * x) * cloud : 0;
      const surplus = sun - load - (kettle > 0 ? 21_000 : 0);
      const heater = surplus > 500 && tank < 640 ? Math.min(surplus, 30_000) : 0;
      const net = Math.round(surplus - heater);
      const diverted = Math.round(heater);
      tank += diverted / 14_600 - (tank - 200) / 12_000 - (minute % 480 === 440 ? next() * 0.3 * (tank - 150) : 0);
      const out = net > 0 ? net : 0;
      const into = net < 0 ? -net : 0;
      const top = Math.round(tank);
      tenths.export += out;
      tenths.import += into;
      tenths.diversion += diverted;
      lines.push(`${date}${clock[minute]}${tenth(out)},${tenth(into)},${tenth(diverted)},${tenth(top)}\n`);
    }
    parts.push(Buffer.from(lines.join(''), 'latin1'));
  }
  const kwh = (sum: number) => sum / 10 / 60 / 1000;
  return {
    csv: Buffer.concat(parts),
    rows: days * 1440,
    kwh: { export: kwh(tenths.export), import: kwh(tenths.import), diversion: kwh(tenths.diversion) },
  };
}

const tenth = (n: number) => `${Math.floor(n / 10)}.${n % 10}`;
