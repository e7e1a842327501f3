import { readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { inspectBytes } from '../../server/ingest/inspect.ts';
import { readLog, type ReadResult } from '../../server/ingest/read.ts';
import type { Day } from '../../shared/api/day.ts';
import type { ColumnPlan } from '../../shared/api/plan.ts';
import { deriveDays } from '../../shared/energy/derive.ts';
import type { Home } from '../../shared/energy/home.ts';
import type { LogLayer, Trace } from '../../shared/energy/layer.ts';
import { effectiveTraces } from '../../shared/energy/trace.ts';
import { duck } from '../support/duck.ts';
import { PLANS } from './samples.plans.ts';
import { ASKED } from './samples.sql.ts';

const folder = path.resolve(import.meta.dirname, '../../samples');

const home = (timeZone: string): Home => ({
  timeZone,
  country: null,
  latitude: null,
  longitude: null,
  ready: { time: '18:00', temperatureC: 50 },
  systems: [{ from: '2020-01-01', cylinder: { volumeLitres: 210 }, boiler: { fuel: 'gas' } }],
  tariffs: [],
});

interface Read {
  plan: ColumnPlan;
  result: ReadResult;
  days: Map<string, Day>;
  traces: ReadonlyMap<string, Trace>;
}

/** A sample from its bytes to days, as the product takes it: its plan found by inspection, questions answered by what is proposed. */
async function take(name: string, dates: string[]): Promise<Read> {
  const bytes = readFileSync(path.join(folder, name));
  const { timeZone } = ASKED[name];
  const place = { timeZone, latitude: null, longitude: null, country: null };
  const { plan } = await inspectBytes(bytes, name, place);
  if (!plan) throw new Error(`${name}: no plan was found`);
  const layers: LogLayer[] = [];
  const pieces = function* (): Generator<Uint8Array> {
    for (let at = 0; at < bytes.length; at += 65_536) yield bytes.subarray(at, at + 65_536);
  };
  const source = async function* (): AsyncGenerator<Uint8Array> {
    yield* pieces();
  };
  const result = await readLog(
    source,
    plan,
    { timeZone },
    {
      layer: (layer) => void layers.push({ ...layer, log: 0 }),
      rejected: (line, column, reason) => {
        throw new Error(`${name} line ${line} ${column}: ${reason}`);
      },
      restart: () => layers.splice(0),
    },
  );
  for (const layer of layers)
    layer.columns = layer.columns.map((column, i) => ({ ...column, intervalSeconds: result.intervals[i] }));
  const traces = effectiveTraces(layers);
  const days = deriveDays({ traces, dates, home: home(timeZone) });
  return { plan, result, days: new Map(days.map((day) => [day.date, day])), traces: traces.traces };
}

/** What a plan says of each column, apart from where the stamp stands and from names. */
function meaning(plan: ColumnPlan): string[] {
  return plan.columns.map(({ channel, kind, unit, sign, factor }) =>
    [channel, kind, unit, sign, factor ?? 1].join(' '),
  );
}

const FIGURE: Record<string, (day: Day) => number | null> = {
  export: (day) => day.exportKwh,
  import: (day) => day.importKwh,
  diversion: (day) => day.heaterKwh,
  generation: (day) => day.generationKwh,
  gasM3: (day) => day.fuelMeasuredM3,
  tankTopMax: (day) => day.tank.maxC,
};

/** Hours for which a state was on, of one civil day in a zone that is on UTC then. */
function hoursOn(trace: Trace | undefined, date: string): number {
  const from = Date.parse(`${date}T00:00:00Z`);
  let sum = 0;
  for (let i = 0; i < (trace?.length ?? 0); i++) {
    if (!trace || trace.v0[i] < 0.5) continue;
    sum += Math.max(0, Math.min(trace.t1[i], from + 86_400_000) - Math.max(trace.t0[i], from));
  }
  return sum / 3_600_000;
}

describe('the product reads the sample logs as DuckDB does', () => {
  it.each(Object.keys(ASKED))(
    '%s: the plan found says what the file says; daily sums within 0.1 percent',
    async (name) => {
      const { asks, sql } = ASKED[name];
      const dates = (await duck(sql('straight'))).map((row) => String(row.day));
      const { plan, result, days, traces } = await take(name, dates);
      expect(meaning(plan)).toEqual(meaning(PLANS[name]));
      expect(plan.delimiter).toBe(PLANS[name].delimiter);
      expect(plan.decimal).toBe(PLANS[name].decimal);
      expect(result.rows.rejected).toBe(0);
      expect(result.rows.accepted).toBe(result.rows.read);
      // A power between two rows is taken as the plan's stamp says; the query is asked accordingly.
      const rows = await duck(sql(plan.time.stamp === 'instant' ? 'straight' : 'held'));
      expect(rows.length).toBeGreaterThan(3);
      for (const row of rows) {
        const date = String(row.day);
        const day = days.get(date);
        for (const ask of asks) {
          const theirs = Number(row[ask]);
          const ours = ask === 'relayHours' ? hoursOn(traces.get('relay'), date) : day && FIGURE[ask](day);
          expect(ours, `${date} ${ask}`).not.toBeNull();
          expect(Math.abs(Number(ours) - theirs), `${date} ${ask}: ${ours} against ${theirs}`).toBeLessThanOrEqual(
            0.001 * Math.abs(theirs) + 1e-6,
          );
        }
      }
    },
  );
});
