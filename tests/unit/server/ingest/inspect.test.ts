import { gzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import {
  type ColumnPlan,
  ColumnPlan as ColumnPlanSchema,
  type Inspection,
  Inspection as InspectionSchema,
} from '../../../../shared/api/plan.ts';
import { applyAnswer } from '../../../../shared/columns/answer.ts';
import { inspectBytes, inspectSummary, shapeKey } from '../../../../server/ingest/inspect.ts';
import { read } from './reading.ts';

const LONDON = { timeZone: 'Europe/London', latitude: 51.5, longitude: -0.13, country: 'United Kingdom' };
const BRISBANE = { timeZone: 'Australia/Brisbane', latitude: null, longitude: null, country: null };
type Place = Parameters<typeof inspectBytes>[2];

const inspect = (content: string | Uint8Array, place: Place = BRISBANE) =>
  inspectBytes(typeof content === 'string' ? new TextEncoder().encode(content) : content, 'log.csv', place);
const planIn = ({ plan, problems }: Inspection): ColumnPlan => {
  if (!plan) throw new Error(JSON.stringify(problems));
  return plan;
};
const asked = ({ questions }: Inspection): string[] => questions.map(({ id }) => id);

/** Answers a question by the first choice whose reason matches. */
function answer(inspection: Inspection, id: string, reason: RegExp): ColumnPlan {
  const question = inspection.questions.find((one) => one.id.startsWith(id));
  const choice = question?.choices.find((one) => reason.test(one.reason));
  if (!question || !choice) throw new Error(`no such choice: ${JSON.stringify(inspection.questions)}`);
  return ColumnPlanSchema.parse(applyAnswer(planIn(inspection), question.id, choice.value));
}

const stamp = (ms: number): string => new Date(ms).toISOString().slice(0, 16).replace('T', ' ');
const sun = (hour: number): number => Math.max(0, Math.sin(((hour - 6) / 12) * Math.PI));

/** Rows at even steps: `cells` by the hour of the day and the number of the row. */
function rows(
  header: string,
  cells: (hour: number, i: number) => (number | string)[],
  { from = '2025-01-06T00:00Z', days = 4, time = stamp, minutes = 30 } = {},
): string {
  const lines = Array.from({ length: (days * 1440) / minutes }, (_, i) => {
    const ms = Date.parse(from) + i * minutes * 60_000;
    return [time(ms), ...cells((ms % 86_400_000) / 3_600_000, i)].join(',');
  });
  return [header, ...lines].join('\n') + '\n';
}
const wavy = (hour: number, i: number): string => ((sun(hour) * 2000 + 10 + ((i * 7) % 13)) / 1000).toFixed(3);

describe('columns', () => {
  it.each([
    ['Einspeisung (kWh)', 'export', 'energy', 'kWh'],
    ['Netzbezug [kWh]', 'import', 'energy', 'kWh'],
    ['PV-Ertrag kWh', 'generation', 'energy', 'kWh'],
    ['Heizstab kW', 'diversion', 'power', 'kW'],
    ['Injection réseau (kWh)', 'export', 'energy', 'kWh'],
    ['Soutirage (kWh)', 'import', 'energy', 'kWh'],
    ['Production solaire kW', 'generation', 'power', 'kW'],
    ['Importación kWh', 'import', 'energy', 'kWh'],
    ['Generación solar kW', 'generation', 'power', 'kW'],
    ['Energia immessa kWh', 'export', 'energy', 'kWh'],
    ['Energia prelevata kWh', 'import', 'energy', 'kWh'],
    ['Teruglevering kWh', 'export', 'energy', 'kWh'],
    ['Afname net kWh', 'import', 'energy', 'kWh'],
    ['Opwekking zonnepanelen kW', 'generation', 'power', 'kW'],
    ['Solar diverter W', 'diversion', 'power', 'W'],
    ['feed-in kWh', 'export', 'energy', 'kWh'],
    ['gridImportKwh', 'import', 'energy', 'kWh'],
    ['Gasverbruik m3', 'gas', 'energy', 'm3'],
    ['Tank top (°C)', 'tankTop', 'level', 'C'],
    ['Speicher unten °C', 'tankBottom', 'level', 'C'],
    ['Ballon milieu °C', 'tankMiddle', 'level', 'C'],
    ['cold_feed_c', 'coldFeed', 'level', 'C'],
    ['Omgeving °C', 'ambient', 'level', 'C'],
    ['EV charger kW', 'charger', 'power', 'kW'],
  ])('reads the heading "%s" as %s', async (heading, channel, kind, unit) => {
    const inspection = await inspect(rows(`time,${heading}`, (h, i) => [wavy(h, i)]));
    expect(asked(inspection)).toEqual([]);
    expect(planIn(inspection).columns).toMatchObject([{ column: heading, channel, kind, unit, sign: 1 }]);
  });

  it.each(['Voltage (V)', 'Humidity %', 'outside temperature °C', 'Price p'])(
    'leaves "%s" out and says why',
    async (heading) => {
      const inspection = await inspect(rows(`time,export kWh,${heading}`, (h, i) => [wavy(h, i), 230 + (i % 3)]));
      expect(planIn(inspection).columns.map(({ channel }) => channel)).toEqual(['export']);
      expect(asked(inspection)).toEqual([]);
      expect(inspection.sample.columns.at(-1)?.reason).toMatch(/^left out/);
    },
  );

  it('takes units from a row of their own', async () => {
    const text = rows('time,export,tank top\n,Wh,°F', (h) => [Math.round(sun(h) * 900), 120 + Math.round(sun(h) * 20)]);
    expect(planIn(await inspect(text))).toMatchObject({
      unitRow: true,
      columns: [{ unit: 'Wh' }, { channel: 'tankTop', unit: 'F' }],
    });
  });

  it('tells counters from amounts, also across a reset', async () => {
    const text = rows('time,import kWh,export kWh', (_, i) => [
      (4000 + i * 0.2).toFixed(1),
      ((i < 100 ? 700 : 0) + i * 0.1).toFixed(1),
    ]);
    expect(planIn(await inspect(text)).columns.map(({ kind }) => kind)).toEqual(['register', 'register']);
  });

  it('asks what a column is that says nothing of itself, and takes the answer', async () => {
    const inspection = await inspect(rows('time,power (W)', (h, i) => [Math.round(sun(h) * 2000) + (i % 5)]));
    expect(asked(inspection)).toEqual(['column:2:power (W)']);
    expect(answer(inspection, 'column', /^Generation/).columns[0]).toMatchObject({
      channel: 'generation',
      kind: 'power',
      unit: 'W',
    });
    const tank = await inspect(rows('time,cylinder temp C', (h) => [(50 + 5 * sun(h)).toFixed(1)]));
    expect(answer(tank, 'column', /bottom/i).columns[0].channel).toBe('tankBottom');
  });

  it('finds the sign of the grid by the night or the heading, and asks of an export that is often negative', async () => {
    const house = (h: number): number => Math.round(300 - sun(h) * 3000);
    const texts = [
      rows('time,grid W', (h) => [house(h)]),
      rows('time,grid W', (h) => [-house(h)]),
      rows('time,grid W (export +)', (h) => [-house(h)]),
    ];
    const found = await Promise.all(texts.map((text) => inspect(text)));
    expect(found.map((one) => planIn(one).columns[0].sign)).toEqual([1, -1, -1]);
    expect(found.flatMap(asked)).toEqual([]);
    const both = await inspect(rows('time,export W', (h) => [-house(h)]));
    expect(answer(both, 'column', /^Grid/).columns[0]).toMatchObject({ channel: 'grid', sign: -1 });
  });

  it('reads a relay’s words, and asks what open means for a valve', async () => {
    const minutes = [0, 17, 49, 131, 190, 411, 500, 777];
    const events = (heading: string, words: string[]): string =>
      [heading, ...minutes.map((m, i) => `${stamp(Date.parse('2025-01-06') + m * 60_000)},${words[i % 2]}`)].join('\n');
    const relay = await inspect(events('time,boiler relay', ['on', 'off']));
    expect(planIn(relay).columns[0]).toMatchObject({ channel: 'relay', kind: 'state', hold: 'toNext' });
    expect(planIn(await inspect(events('time,relay', ['closed', 'open']))).columns[0]).toMatchObject({
      on: ['closed'],
      off: ['open'],
    });
    const valve = await inspect(events('time,zone valve', ['closed', 'open']));
    expect(answer(valve, 'column', /open means/).columns[0]).toMatchObject({ on: ['open'], off: ['closed'] });
  });

  it('tells a logger of changes from one that is a little late now and then', async () => {
    const file = (step: (i: number) => number): string => {
      let at = Date.parse('2025-01-06');
      const lines = Array.from(
        { length: 200 },
        (_, i) => `${new Date((at += step(i) * 1000)).toISOString()},${200 + ((i * 37) % 90)}`,
      );
      return ['time,import W', ...lines].join('\n');
    };
    const found = await Promise.all([
      inspect(file((i) => 60 + ((i * 7) % 11))),
      inspect(file((i) => 5 + ((i * 131) % 900))),
    ]);
    expect(found.map((one) => planIn(one).columns[0].hold)).toEqual([undefined, 'toNext']);
  });

  it('adds parts of one channel, drops its total, and asks where it cannot tell', async () => {
    const parts = await inspect(
      rows('time,import L1 kWh,import L2 kWh,import kWh', (h, i) => [wavy(h, i), wavy(h, i), wavy(h, i)]),
    );
    expect(planIn(parts).columns.map(({ column }) => column)).toEqual(['import L1 kWh', 'import L2 kWh']);
    const twice = await inspect(rows('time,import house kWh,import shed kWh', (h, i) => [wavy(h, i), wavy(h, i)]));
    expect(answer(twice, 'double', /^Only "import shed/).columns).toHaveLength(1);
  });

  it.each([
    ['local', stamp],
    ['UTC', (ms: number) => new Date(ms - 36_000_000).toISOString()],
  ])('sees that a logger of generation sleeps in the dark, in %s times', async (_, time) => {
    const lines = rows('time,generation W', (h) => [Math.round(sun(h) * 3000)], { days: 6, time }).split('\n');
    const awake = lines.filter((line, i) => i === 0 || !/,0$/.test(line));
    expect(planIn(await inspect(awake.join('\n'))).columns[0].sleeps).toBe('dark');
    expect(planIn(await inspect(lines.join('\n'))).columns[0].sleeps).toBeUndefined();
  });
});

describe('times', () => {
  const part = (ms: number): string[] => [stamp(ms).slice(8, 10), stamp(ms).slice(5, 7), stamp(ms).slice(0, 4)];
  const dmy = (ms: number): string => `${part(ms).join('/')} ${stamp(ms).slice(11)}`;
  const mdy = (ms: number): string => `${[part(ms)[1], part(ms)[0], part(ms)[2]].join('/')} ${stamp(ms).slice(11)}`;
  const cell = (h: number): string[] => [sun(h).toFixed(3)];
  const meter = (_: number, i: number): string[] => [(0.1 + (i % 5) / 50).toFixed(3)];

  it('tells day first from month first by the days there are or by their order, and asks of a single day', async () => {
    const files = ['2025-01-10T00:00Z', '2025-01-02T00:00Z'].flatMap((from) =>
      [dmy, mdy].map((time) => rows('date,export kWh', cell, { time, from, days: 3 })),
    );
    const found = await Promise.all(files.map((text) => inspect(text)));
    expect(found.map((one) => planIn(one).time.format.slice(0, 2))).toEqual(['dd', 'MM', 'dd', 'MM']);
    expect(found.flatMap(asked)).toEqual([]);
    const one = await inspect(rows('date,export kWh', cell, { time: dmy, from: '2025-03-05T00:00Z', days: 1 }));
    expect(answer(one, 'time:format', /5 March 2025/).time.format).toBe('dd/MM/yyyy HH:mm');
    expect(answer(one, 'time:format', /3 May 2025/).time.format).toBe('MM/dd/yyyy HH:mm');
  });

  it('asks for the clock only where it is in doubt', async () => {
    const text = (from: string): string => rows('time,import kWh', meter, { from });
    expect(asked(await inspect(text('2025-06-02T00:00Z'), LONDON))).toEqual(['time:zone']);
    expect(asked(await inspect(text('2025-01-06T00:00Z'), LONDON))).toEqual([]);
    expect(asked(await inspect(text('2025-06-02T00:00Z')))).toEqual([]);
    const utc = await inspect(text('2025-06-02T00:00Z').replace('time', 'time (UTC)'), LONDON);
    expect([planIn(utc).time.zone, asked(utc)]).toEqual(['UTC', []]);
  });

  it('sees a clock that is never put forward, and asks where the repeated hour stands once', async () => {
    const spring = await inspect(rows('time,import kWh', meter, { from: '2025-03-28T00:00Z' }), LONDON);
    expect([planIn(spring).time.zone, asked(spring)]).toEqual(['UTC', []]);
    const autumn = await inspect(rows('time,import kWh', meter, { from: '2025-10-24T00:00Z' }), LONDON);
    expect(asked(autumn)).toEqual(['time:zone']);
  });

  it('finds the clock by the sun', async () => {
    // Sunrise and sunset in London on 21 June are at 03:43 and 20:22 UTC (references.md 10).
    const light = (h: number): number => (h > 4 && h < 20 ? Math.round(Math.sin(((h - 4) / 16) * Math.PI) * 3000) : 0);
    const span = { from: '2025-06-19T00:00Z', days: 5, minutes: 10 };
    const civil = await inspect(
      rows('time,generation W', (h) => [light(h - 1)], span),
      LONDON,
    );
    expect([planIn(civil).time.zone, asked(civil)]).toEqual(['Europe/London', []]);
    const utc = await inspect(
      rows('time,generation W', (h) => [light(h)], span),
      LONDON,
    );
    expect([planIn(utc).time.zone, asked(utc)]).toEqual(['UTC', []]);
  });

  it('takes starts and ends from headings, and from whole days', async () => {
    const files = [
      rows('interval end,export kWh', cell),
      rows('Von,Einspeisung kWh', cell),
      rows('time,export kWh', cell, { from: '2025-01-06T00:30Z' }),
      rows('time,export kWh', cell),
      rows('time,export kW', cell),
    ];
    const stamps = await Promise.all(files.map(async (text) => planIn(await inspect(text)).time.stamp));
    expect(stamps).toEqual(['end', 'start', 'end', 'start', 'instant']);
  });
});

describe('what is no log', () => {
  it.each([
    ['an empty file', '', /empty/],
    ['a heading alone', 'time,export\n', /times|table/],
    ['a letter', 'Dear reader,\nthis is a letter.\nIt has lines, and commas, but no readings.\n', /table|times/],
    ['numbers without time', '1,2\n3,4\n5,6\n', /times/],
    ['a PDF', '%PDF-1.7\n', /PDF/],
    ['a web page', '<!DOCTYPE html><html><body>Sign in</body></html>', /web page/],
    ['JSON', '[{"time": 1}]', /JSON/],
    ['a picture', Uint8Array.from([0x89, 0x50, 0x4e, 0x47, 13, 10, 26, 10]), /picture/],
    ['a damaged packed file', Uint8Array.from([0x1f, 0x8b, 8, 0, 1, 2, 3]), /damaged/],
    ['times without numbers', 'time,who\n2026-01-01,Ann\n2026-01-02,Ben\n', /readings/],
  ])('%s is said to be none, in words', async (_, content, reason) => {
    const { plan, problems, summary } = await inspect(content);
    expect([plan, problems.length, shapeKey(summary)]).toEqual([null, 1, null]);
    expect(problems[0].reason).toMatch(reason);
  });
});

describe('looking again', () => {
  const text = rows('time,export kWh,import kWh', (h, i) => [sun(h).toFixed(3), (i % 5) / 10]);

  it('needs the summary alone, which is plain JSON, and gives the same', async () => {
    const { summary, ...first } = await inspect(text);
    expect(inspectSummary(JSON.parse(JSON.stringify(summary)), BRISBANE)).toEqual(first);
    expect(InspectionSchema.parse(first)).toEqual(first);
  });

  it('shows what a corrected plan reads, and why it cannot', async () => {
    const inspection = await inspect(text);
    const plan = planIn(inspection);
    const given = { ...plan, columns: [{ ...plan.columns[1], channel: 'export' as const }] };
    const again = inspectSummary(inspection.summary, BRISBANE, given);
    expect(again).toMatchObject({ plan: given, questions: [], problems: [] });
    expect(again.sample.readings[1].values).toEqual([0.1]);
    const wrong = { ...given, columns: [{ ...given.columns[0], column: 'solar' }] };
    expect(inspectSummary(inspection.summary, BRISBANE, wrong).problems).toMatchObject([{ line: 1, column: 'solar' }]);
    expect(inspectSummary(inspection.summary, BRISBANE, { ...given, encoding: 'klingon' }).problems[0].reason).toMatch(
      /encoding/,
    );
  });

  it('gives files of one shape one key, and others another; packed ones too', async () => {
    const key = async (content: string | Uint8Array): Promise<string | null> =>
      shapeKey((await inspect(content)).summary);
    const later = rows('time,export kWh,import kWh', (h, i) => [(sun(h) * 2).toFixed(3), i % 3], {
      from: '2025-07-01T00:00Z',
    });
    expect(await key(later)).toBe(await key(text));
    expect(await key(gzipSync(text))).toBe(await key(text));
    expect(await key(text.replaceAll(',', ';'))).not.toBe(await key(text));
  });

  it('reads a packed file as the file within', async () => {
    const plan = planIn(await inspect(gzipSync(text)));
    expect((await read(gzipSync(text), plan)).readings).toEqual((await read(text, plan)).readings);
  });
});

describe('answers', () => {
  it('leave a plan as it is where the value is none of ours', () => {
    const plan = planIn({ plan: { encoding: 'utf-8' } as ColumnPlan, problems: [] } as unknown as Inspection);
    for (const value of ['', 'yes', '7', 'null', '[1]']) expect(applyAnswer(plan, 'x', value)).toBe(plan);
  });
});
