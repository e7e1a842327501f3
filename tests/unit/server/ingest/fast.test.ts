import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { ColumnPlan } from '../../../../shared/api/plan.ts';
import { isPlain } from '../../../../server/ingest/fast.ts';
import { planOf, read } from './reading.ts';

const pad = (n: number, width = 2): string => String(n).padStart(width, '0');

/** Ways to write a civil time: the plan's time part and the cells. Written here by hand, not by the code under test. */
const FORMS: { time: Pick<ColumnPlan['time'], 'columns' | 'format'>; cells: (d: Date, i: number) => string[] }[] = [
  { time: { columns: ['t'], format: 'iso' }, cells: (d) => [d.toISOString().slice(0, 19)] },
  { time: { columns: ['t'], format: 'iso' }, cells: (d) => [d.toISOString().slice(0, 16).replace('T', ' ')] },
  { time: { columns: ['t'], format: 'iso' }, cells: (d) => [d.toISOString().slice(0, 19) + 'Z'] },
  { time: { columns: ['t'], format: 'iso' }, cells: (d) => [d.toISOString().slice(0, 19) + '-03:30'] },
  { time: { columns: ['t'], format: 'epochSeconds' }, cells: (d) => [String(d.getTime() / 1000)] },
  { time: { columns: ['t'], format: 'epochMilliseconds' }, cells: (d) => [String(d.getTime())] },
  {
    time: { columns: ['t'], format: 'dd/MM/yyyy HH:mm' },
    cells: (d) => [
      `${pad(d.getUTCDate())}/${pad(d.getUTCMonth() + 1)}/${d.getUTCFullYear()} ${d.toISOString().slice(11, 16)}`,
    ],
  },
  {
    time: { columns: ['t', 'u'], format: 'dd.MM.yyyy HH:mm:ss' },
    cells: (d) => [
      `${pad(d.getUTCDate())}.${pad(d.getUTCMonth() + 1)}.${d.getUTCFullYear()}`,
      d.toISOString().slice(11, 19),
    ],
  },
  {
    time: { columns: ['t'], format: "MM-dd-yyyy'T'HH:mm" },
    cells: (d) => [
      `${pad(d.getUTCMonth() + 1)}-${pad(d.getUTCDate())}-${d.getUTCFullYear()}T${d.toISOString().slice(11, 16)}`,
    ],
  },
];

interface Case {
  text: string;
  plan: ColumnPlan;
}

/** Plain tables in many forms, around a clock change or not, with odd cells now and then. */
const tables: fc.Arbitrary<Case> = fc
  .record({
    form: fc.constantFrom(...FORMS),
    delimiter: fc.constantFrom(',', ';', '\t', '|'),
    comma: fc.boolean(),
    start: fc.constantFrom(
      '2026-03-28T20:00Z',
      '2026-10-24T20:00Z',
      '2024-02-28T22:00Z',
      '1990-12-31T20:00Z',
      '2026-06-30T23:00Z',
    ),
    step: fc.constantFrom(10, 60, 900, 1800, 3600),
    zone: fc.constantFrom('Europe/London', 'UTC', '+10:00', 'Australia/Lord_Howe'),
    lineEnd: fc.constantFrom('\n', '\r\n', '\r'),
    ignored: fc.boolean(),
    order: fc.constantFrom('up', 'up', 'up', 'down'),
    cells: fc.array(
      fc.tuple(
        fc.oneof(
          {
            weight: 8,
            arbitrary: fc
              .tuple(fc.integer({ min: -5000, max: 99999 }), fc.nat(3))
              .map(([n, d]) => (n / 10 ** d).toFixed(d)),
          },
          {
            weight: 1,
            arbitrary: fc.constantFrom(
              '',
              '-',
              'n/a',
              '1e3',
              '.5',
              '5.',
              '+7',
              '"8"',
              '1234567890123456',
              '98765432109876543',
              '0.12345678901234567',
              '--3',
              '1.2.3',
              ' 4 ',
              'x',
              '-0',
              '.',
              '\0',
            ),
          },
        ),
        fc.oneof(
          { weight: 8, arbitrary: fc.nat(9).map(String) },
          { weight: 1, arbitrary: fc.constantFrom('', '"a\nb"', '"1,2;3|4\t5"', '"', 'é', 'n/a') },
        ),
      ),
      { minLength: 1, maxLength: 80 },
    ),
    end: fc.boolean(),
  })
  .map(({ form, delimiter, comma, start, step, zone, lineEnd, ignored, order, cells, end }) => {
    const decimal = comma && delimiter !== ',' ? ',' : '.';
    const head = [...form.time.columns, ...(ignored ? ['note'] : []), 'a', 'b'];
    const rows = cells.map(([a, b], i) => {
      const at = new Date(Date.parse(start) + i * step * 1000);
      return [...form.cells(at, i), ...(ignored ? [b] : []), a.replace('.', decimal), b].join(delimiter);
    });
    if (order === 'down') rows.reverse();
    const plan = planOf({
      delimiter,
      decimal,
      time: { ...form.time, zone, stamp: 'start' },
      columns: [
        { column: 'a', channel: 'export', kind: 'power', unit: 'W', sign: 1 },
        { column: 'b', channel: 'import', kind: 'power', unit: 'W', sign: -1 },
      ],
    });
    return { text: [head.join(delimiter), ...rows].join(lineEnd) + (end ? lineEnd : ''), plan };
  });

/** A table with a few of its characters changed, taken out, doubled or cut off. */
const mutated: fc.Arbitrary<Case> = fc
  .tuple(
    tables,
    fc.array(
      fc.tuple(
        fc.nat(),
        fc.constantFrom('drop', 'double', 'swap', 'cut'),
        fc.constantFrom(...',;\t|.:-+0 9"\n\r\0TZé/'),
      ),
      { maxLength: 4 },
    ),
  )
  .map(([{ text, plan }, changes]) => {
    const headEnd = text.search(/[\n\r]/) + 1;
    let body = text.slice(headEnd);
    for (const [where, how, char] of changes) {
      const at = where % (body.length + 1);
      if (how === 'drop') body = body.slice(0, at) + body.slice(at + 1);
      else if (how === 'double') body = body.slice(0, at) + body.slice(Math.max(0, at - 5));
      else if (how === 'swap') body = body.slice(0, at) + char + body.slice(at + 1);
      else if (where % 3 === 0) body = body.slice(0, at);
    }
    return { text: text.slice(0, headEnd) + body, plan };
  });

async function same({ text, plan }: Case, size: number): Promise<number> {
  expect(isPlain(plan)).toBe(true);
  const fast = await read(text, plan, { size });
  const general = await read(text, plan, { size: 4096, choice: 'general' });
  expect(fast.layers).toEqual(general.layers);
  expect(fast.rejected).toEqual(general.rejected);
  expect({ ...fast.result, fastRows: 0 }).toEqual(general.result);
  const { read: rows, accepted, rejected, unchanged } = fast.result.rows;
  expect(accepted + rejected + unchanged).toBe(rows);
  return fast.result.fastRows;
}

/** `FUZZ` times as many cases, for long runs. */
const MORE = Number(process.env.FUZZ ?? 1);

describe('the fast path', { timeout: 120_000 * MORE }, () => {
  it('gives what the general reader gives, on generated tables', async () => {
    await fc.assert(
      fc.asyncProperty(
        tables,
        fc.integer({ min: 1, max: 3000 }),
        async (table, size) => void (await same(table, size)),
      ),
      { numRuns: 150 * MORE },
    );
  });

  it('gives what the general reader gives, on mutated tables', async () => {
    await fc.assert(
      fc.asyncProperty(
        mutated,
        fc.integer({ min: 1, max: 3000 }),
        async (table, size) => void (await same(table, size)),
      ),
      { numRuns: 300 * MORE },
    );
  });

  it.each(FORMS)('takes nearly all rows of a plain table in $time.format', async ({ time, cells }) => {
    const rows = Array.from({ length: 500 }, (_, i) =>
      [...cells(new Date(Date.UTC(2026, 5, 1) + i * 60_000), i), i, 2].join(';'),
    );
    const plan = planOf({
      delimiter: ';',
      time: { ...time, zone: 'Europe/London', stamp: 'start' },
      columns: [{ column: 'a', channel: 'export', kind: 'power', unit: 'W', sign: 1 }],
    });
    const text = [[...time.columns, 'a', 'b'].join(';'), ...rows].join('\n') + '\n';
    expect(await same({ text, plan }, 1000)).toBeGreaterThanOrEqual(499);
  });

  it('tells the way of a file by the row before a repeated hour, also where it took that row itself', async () => {
    const text = 't,a\n2026-12-01T00:00,0\n2026-10-20T00:00,1\n2026-10-25T01:30,2\n2026-10-25T01:00,3\n';
    const plan = planOf({
      time: { columns: ['t'], format: 'iso', zone: 'Europe/London', stamp: 'start' },
      columns: [{ column: 'a', channel: 'export', kind: 'power', unit: 'W', sign: 1 }],
    });
    for (const choice of ['best', 'general'] as const) {
      const { readings, result } = await read(text, plan, { choice });
      const times = readings[0].map(([at]) => new Date(at).toISOString().slice(0, 16));
      expect(times.slice(0, 3)).toEqual(['2026-10-19T23:00', '2026-10-25T00:30', '2026-10-25T01:00']);
      expect(result.problems).toEqual([]);
      expect(result.fastRows).toBe(choice === 'best' ? 1 : 0);
    }
  });

  it('leaves a quote in a column that is not kept to the general reader, since it may run over lines', async () => {
    const at = (minute: number): string => `2026-06-01T00:0${minute}Z`;
    const text = `t,note,a\n${at(0)},x,0\n${at(1)},"x,1\n${at(2)},y",2\n${at(3)},z,3\n`;
    const plan = planOf({
      time: { columns: ['t'], format: 'iso', zone: 'UTC', stamp: 'start' },
      columns: [{ column: 'a', channel: 'export', kind: 'power', unit: 'W', sign: 1 }],
    });
    await same({ text, plan }, 1000);
    const { readings } = await read(text, plan);
    expect(readings[0].map(([, value]) => value)).toEqual([0, 2, 3]);
  });
});
