import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { ColumnPlan } from '../../../../shared/api/plan.ts';
import { LogRefused, readLog } from '../../../../server/ingest/read.ts';
import { pieces, planOf, read } from './reading.ts';

const at = (text: string): number => Date.parse(text);
const utf16 = (text: string, bigEndian: boolean, mark: boolean): Uint8Array => {
  const bytes = Buffer.from((mark ? '\ufeff' : '') + text, 'utf16le');
  return bigEndian ? bytes.swap16() : bytes;
};

const PLAIN = 'time,export\n2026-01-01T00:00:00Z,0.5\n2026-01-01T00:30:00Z,0.25\n';
const PLAIN_READINGS = [
  [at('2026-01-01T00:00Z'), 0.5],
  [at('2026-01-01T00:30Z'), 0.25],
];

describe('readLog', () => {
  it('reads a plain table, whole and in pieces of any size', async () => {
    for (const size of [1, 2, 3, 7, 1000]) {
      const { result, readings } = await read(PLAIN, planOf(), { size });
      expect(readings[0]).toEqual(PLAIN_READINGS);
      expect(result).toMatchObject({
        rows: { read: 2, accepted: 2, rejected: 0, unchanged: 0 },
        from: '2026-01-01T00:00:00.000Z',
        to: '2026-01-01T00:30:00.000Z',
        intervals: [1800],
        problems: [],
      });
    }
  });

  it.each([
    ['utf-8 with a mark', 'utf-8', new TextEncoder().encode('\ufeff' + PLAIN)],
    ['utf-16 little-endian with a mark', 'utf-16le', utf16(PLAIN, false, true)],
    ['utf-16 little-endian without a mark', 'utf-16le', utf16(PLAIN, false, false)],
    ['utf-16 big-endian with a mark', 'utf-16be', utf16(PLAIN, true, true)],
    ['utf-16 big-endian without a mark', 'utf-16be', utf16(PLAIN, true, false)],
    ['a mark that the plan does not know of', 'utf-8', utf16(PLAIN, true, true)],
  ])('reads %s', async (_, encoding, bytes) => {
    for (const size of [1, 5, 4096]) {
      expect((await read(bytes, planOf({ encoding }), { size })).readings[0]).toEqual(PLAIN_READINGS);
    }
  });

  it('reads windows-1252 headings', async () => {
    const bytes = Buffer.from('time,Überschuss °C\n2026-01-01T00:00Z,1\n', 'latin1');
    const plan = planOf({ encoding: 'windows-1252' });
    plan.columns[0].column = 'Überschuss °C';
    expect((await read(bytes, plan)).readings[0]).toHaveLength(1);
  });

  it.each([
    [';', ',', 'time;export\n2026-01-01T00:00:00Z;0,5\n2026-01-01T00:30:00Z;0,25\n'],
    ['\t', '.', 'time\texport\n2026-01-01T00:00:00Z\t0.5\n2026-01-01T00:30:00Z\t.25\n'],
    ['|', ',', 'time|export\n2026-01-01T00:00:00Z|0,5\n2026-01-01T00:30:00Z|0,25\n'],
    ['  ', '.', 'time    export\n2026-01-01T00:00:00Z   0.5\n  2026-01-01T00:30:00Z 0.25\n'],
    [',', ',', 'time,export\n2026-01-01T00:00:00Z,"0,5"\n2026-01-01T00:30:00Z,"0,25"\n'],
  ] as const)('reads delimiter "%s" with decimal "%s"', async (delimiter, decimal, text) => {
    expect((await read(text, planOf({ delimiter, decimal }))).readings[0]).toEqual(PLAIN_READINGS);
  });

  it('takes LF, CR and CR LF in one file, and a last line without end', async () => {
    const text = 'time,export\r2026-01-01T00:00:00Z,0.5\r\n\n\r2026-01-01T00:30:00Z,0.25';
    for (const size of [1, 10, 4096]) {
      const { result, readings } = await read(text, planOf(), { size });
      expect(readings[0]).toEqual(PLAIN_READINGS);
      expect(result.rows.read).toBe(2);
    }
  });

  it('tells a row that the file ends in', async () => {
    const { result, rejected } = await read('time,import,export\n2026-01-01T00:00Z,1,2\n2026-01-01T00:30Z,1', {
      ...planOf(),
      columns: [
        { column: 'import', channel: 'import', kind: 'energy', unit: 'kWh', sign: 1 },
        { column: 'export', channel: 'export', kind: 'energy', unit: 'kWh', sign: 1 },
      ],
    });
    expect(result.rows).toEqual({ read: 2, accepted: 1, rejected: 1, unchanged: 0 });
    expect(rejected).toEqual([
      { line: 3, column: null, reason: 'The file ends in the middle of this row.', text: '2026-01-01T00:30Z,1' },
    ]);
  });

  it('passes a preamble, a row of units, skipped rows, footers and headings that come again', async () => {
    const text = [
      'House "at the corner',
      '',
      'time,export',
      ',kWh',
      'skip,me',
      '2026-01-01T00:00:00Z,0.5',
      'time,export',
      '',
      '2026-01-01T00:30:00Z,0.25',
      ',,,',
      'Total,0.75',
    ].join('\n');
    const { result, readings, rejected } = await read(text, planOf({ headerLine: 3, unitRow: true, skipRows: 1 }));
    expect(readings[0]).toEqual(PLAIN_READINGS);
    expect(rejected.map(({ line, column }) => [line, column])).toEqual([
      [7, null],
      [11, 'time'],
    ]);
    expect(result.rows).toEqual({ read: 4, accepted: 2, rejected: 2, unchanged: 0 });
  });

  it('keeps quoted line ends within a row and counts lines by the file', async () => {
    const text =
      'time,note,export\n2026-01-01T00:00:00Z,"two\nlines, ""so""",0.5\nbroken,x,1\n2026-01-01T00:30:00Z,"never closed,0.25\n';
    const { readings, rejected } = await read(text, planOf());
    expect(readings[0]).toEqual(PLAIN_READINGS);
    expect(rejected.map(({ line }) => line)).toEqual([4]);
  });

  it('keeps missing, invalid and zero apart', async () => {
    const text = [
      'time,export,import',
      '2026-01-01T00:00Z,0,?',
      '2026-01-01T00:30Z,-,n/a',
      '2026-01-01T01:00Z,1.2.3,4',
      '2026-01-01T01:30Z,"1,5",NaN',
      '2026-01-01T02:00Z,-0.0,',
      '2026-01-01T02:30Z,9999,1',
    ].join('\n');
    const plan = planOf({ missing: ['9999'] });
    plan.columns.push({ column: 'import', channel: 'import', kind: 'energy', unit: 'kWh', sign: 1 });
    const { result, readings, rejected } = await read(text, plan);
    expect(readings[0]).toEqual([
      [at('2026-01-01T00:00Z'), 0],
      [at('2026-01-01T02:00Z'), 0],
    ]);
    expect(readings[1]).toEqual([
      [at('2026-01-01T01:00Z'), 4],
      [at('2026-01-01T02:30Z'), 1],
    ]);
    expect(rejected.map(({ line, reason }) => [line, reason])).toEqual([
      [3, 'The row has no usable value.'],
      [5, 'The row has no usable value.'],
    ]);
    expect(result.problems).toContainEqual({ line: 4, column: 'export', reason: 'A cell is no number.', count: 2 });
  });

  it('never lets a stray decimal comma shift the columns', async () => {
    const text = 'time,export,import\n2026-01-01T00:00Z,0,5,0,3\n';
    const { result } = await read(text, planOf());
    expect(result.rows).toEqual({ read: 1, accepted: 0, rejected: 1, unchanged: 0 });
  });

  it('keeps values as they are written, with the digits of the day', async () => {
    const { layers } = await read('time,export\n2026-01-01T00:00Z,5\n2026-01-01T01:00Z,0.250\n', planOf());
    expect(layers[0].columns[0].scale).toBe(3);
    expect([...layers[0].columns[0].values]).toEqual([5000, 250]);
    const wide = await read('time,export\n2026-01-01T00:00Z,9007199254740993\n2026-01-01T01:00Z,0.5\n', planOf());
    expect(wide.layers[0].columns[0].scale).toBeNull();
    expect([...wide.layers[0].columns[0].values]).toEqual([9007199254740992, 0.5]);
  });

  it('gives back any number exactly as the platform reads it', async () => {
    const number = fc.oneof(
      fc.double({ noNaN: true, noDefaultInfinity: true }).map(String),
      fc.tuple(fc.integer(), fc.nat(999_999)).map(([a, b]) => `${a}.${String(b).padStart(6, '0')}`),
    );
    await fc.assert(
      fc.asyncProperty(fc.array(number, { minLength: 1, maxLength: 20 }), async (numbers) => {
        const rows = numbers.map((n, i) => `${new Date(i * 60_000 + at('2026-01-01')).toISOString()},${n}`);
        for (const choice of ['best', 'general'] as const) {
          const { readings } = await read(['time,export', ...rows].join('\n'), planOf(), { choice });
          expect(readings[0].map(([, value]) => value)).toEqual(numbers.map((n) => Number(n) + 0));
        }
      }),
      { numRuns: 200 },
    );
  });

  it('reads thousands, units behind numbers and typographic minus signs, and no other unit', async () => {
    const text =
      'time;export\n2026-01-01T00:00Z;1.234,5 kWh\n2026-01-01T01:00Z;−2\n2026-01-01T02:00Z;3 Wh\n2026-01-01T03:00Z;1.23,4\n';
    const { readings, rejected } = await read(text, planOf({ delimiter: ';', decimal: ',', thousands: '.' }));
    expect(readings[0].map(([, value]) => value)).toEqual([1234.5, -2]);
    expect(rejected).toHaveLength(2);
  });

  it('reads a state by its own words and the usual ones', async () => {
    const text =
      'time,relay\n2026-01-01T00:00Z,closed\n2026-01-01T01:00Z,OPEN\n2026-01-01T02:00Z,on\n2026-01-01T03:00Z,1.0\n2026-01-01T04:00Z,half\n';
    const { readings, result } = await read(text, {
      ...planOf(),
      columns: [
        { column: 'relay', channel: 'relay', kind: 'state', unit: 'state', sign: 1, on: ['closed'], off: ['open'] },
      ],
    });
    expect(readings[0].map(([, value]) => value)).toEqual([1, 0, 1, 1]);
    expect(result.rows).toMatchObject({ accepted: 4, rejected: 1 });
  });

  it('takes the last row at an instant and counts repeats as unchanged', async () => {
    const text = [
      'time,export,import',
      '2026-01-01T00:00Z,1,1',
      '2026-01-01T00:30Z,2,2',
      '2026-01-01T00:00Z,1,1',
      '2026-01-01T00:30Z,3,',
    ].join('\n');
    const plan = planOf();
    plan.columns.push({ column: 'import', channel: 'import', kind: 'energy', unit: 'kWh', sign: 1 });
    const { result, readings } = await read(text, plan);
    expect(readings[0].map(([, value]) => value)).toEqual([1, 3]);
    expect(readings[1].map(([, value]) => value)).toEqual([1, 2]);
    expect(result.rows).toEqual({ read: 4, accepted: 3, rejected: 0, unchanged: 1 });
    expect(result.problems).toMatchObject([{ count: 1 }]);
  });

  it('gives the same layers in any order of rows, and restarts at most once', async () => {
    const rows = Array.from(
      { length: 200 },
      (_, i) => `${new Date(at('2026-01-01') + i * 3_600_000).toISOString()},${i}`,
    );
    const straight = await read(['time,export', ...rows].join('\n'), planOf());
    await fc.assert(
      fc.asyncProperty(
        fc.shuffledSubarray(rows, { minLength: rows.length }),
        fc.boolean(),
        async (shuffled, restart) => {
          const got = await read(['time,export', ...shuffled].join('\n'), planOf(), { restart, size: 100 });
          expect(got.readings).toEqual(straight.readings);
          expect(got.result.intervals).toEqual([3600]);
          expect(got.restarts).toBeLessThanOrEqual(1);
        },
      ),
      { numRuns: 20 },
    );
    const newestFirst = await read(['time,export', ...[...rows].reverse()].join('\n'), planOf(), { size: 100 });
    expect(newestFirst.readings).toEqual(straight.readings);
    expect(newestFirst.restarts).toBe(0);
  });

  it('reads long shape, one value to a row', async () => {
    const text = [
      'time,what,value',
      '2026-01-01T00:00Z,exp,1',
      '2026-01-01T00:00Z,imp,2',
      '2026-01-01T00:00Z,other,9',
      '2026-01-01T00:30Z,imp,3',
      '2026-01-01T00:30Z,exp,x',
    ].join('\n');
    const { result, readings } = await read(
      text,
      planOf({
        shape: { kind: 'long', nameColumn: 'what', valueColumn: 'value' },
        columns: [
          { column: 'exp', channel: 'export', kind: 'energy', unit: 'kWh', sign: 1 },
          { column: 'imp', channel: 'import', kind: 'energy', unit: 'kWh', sign: 1 },
        ],
      }),
    );
    expect(readings).toEqual([
      [[at('2026-01-01T00:00Z'), 1]],
      [
        [at('2026-01-01T00:00Z'), 2],
        [at('2026-01-01T00:30Z'), 3],
      ],
    ]);
    expect(result.rows).toEqual({ read: 5, accepted: 4, rejected: 1, unchanged: 0 });
  });

  describe('across a day', () => {
    const across = (
      days: [string, number][],
      perDay: number,
      stamp: 'start' | 'end' = 'start',
    ): [string, ColumnPlan] => [
      [
        ['date', ...Array.from({ length: 50 }, (_, i) => `p${i + 1}`)].join(','),
        ...days.map(([date, n]) => [date, ...Array.from({ length: n }, (_, i) => i + 1)].join(',')),
      ].join('\n'),
      planOf({
        shape: { kind: 'acrossDay', firstColumn: 'p1', perDay },
        time: { columns: ['date'], format: 'yyyy-MM-dd', zone: 'Europe/London', stamp },
      }),
    ];

    it('places the 46 and 50 half-hours of change days by the hours that passed', async () => {
      // Period 5 of the long day begins at the second 01:00 (GB settlement, references.md 11).
      const { readings } = await read(
        ...across(
          [
            ['2026-03-29', 46],
            ['2026-10-25', 50],
          ],
          48,
        ),
      );
      expect(readings[0]).toHaveLength(96);
      expect(readings[0][0][0]).toBe(at('2026-03-29T00:00Z'));
      expect(readings[0][45][0]).toBe(at('2026-03-29T22:30Z'));
      expect(readings[0][46][0]).toBe(at('2026-10-24T23:00Z'));
      expect(readings[0][46 + 4]).toEqual([at('2026-10-25T01:00Z'), 5]);
      expect(readings[0][95]).toEqual([at('2026-10-25T23:30Z'), 50]);
    });

    it('goes by the clock where such a day has 48 values, and says so', async () => {
      const { readings, result } = await read(
        ...across(
          [
            ['2026-03-29', 48],
            ['2026-10-25', 48],
          ],
          48,
        ),
      );
      expect(readings[0].filter(([t]) => t < at('2026-06-01'))).toHaveLength(46);
      expect(readings[0].find(([t]) => t === at('2026-03-29T01:00Z'))?.[1]).toBe(5);
      expect(readings[0].some(([t]) => t === at('2026-10-25T01:00Z'))).toBe(false);
      expect(readings[0].find(([t]) => t === at('2026-10-25T02:00Z'))?.[1]).toBe(5);
      expect(result.problems).toHaveLength(2);
    });

    it('puts stamps at ends where the plan says so, and counts a day that comes again', async () => {
      const { readings, result } = await read(
        ...across(
          [
            ['2026-01-01', 24],
            ['2026-01-01', 24],
          ],
          24,
          'end',
        ),
      );
      expect(readings[0][0][0]).toBe(at('2026-01-01T01:00Z'));
      expect(readings[0][23][0]).toBe(at('2026-01-02T00:00Z'));
      expect(result.rows).toEqual({ read: 2, accepted: 1, rejected: 0, unchanged: 1 });
    });
  });

  it.each([
    [
      'a column that is not there',
      planOf({ columns: [{ ...planOf().columns[0], column: 'solar' }] }),
      /no column "solar"/,
    ],
    ['a column number beyond the heading', planOf({ columns: [{ ...planOf().columns[0], column: 7 }] }), /column 7/],
    ['a heading beyond the end', planOf({ headerLine: 90 }), /line 90/],
    ['no such zone', planOf({ time: { ...planOf().time, zone: 'Mars/Base' } }), /no time zone/],
    ['no such format', planOf({ time: { ...planOf().time, format: 'QQQ' } }), /not known/],
    ['no such encoding', planOf({ encoding: 'klingon' }), /no encoding/],
  ])('refuses %s', async (_, plan, message) => {
    await expect(read(PLAIN, plan)).rejects.toThrow(LogRefused);
    await expect(read(PLAIN, plan)).rejects.toThrow(message);
  });

  it('refuses a line without end early, by either way, without keeping it', async () => {
    async function* endless(): AsyncGenerator<Uint8Array> {
      yield new TextEncoder().encode(PLAIN);
      const chunk = new Uint8Array(65_536).fill(0x31);
      for (let i = 0; i < 16_384; i++) yield chunk;
    }
    for (const choice of ['best', 'general'] as const) {
      const before = process.memoryUsage().rss;
      const sink = { layer() {}, rejected() {} };
      await expect(readLog(endless, planOf(), { timeZone: 'UTC' }, sink, choice)).rejects.toMatchObject({
        name: 'LogRefused',
        line: 4,
      });
      expect(process.memoryUsage().rss - before).toBeLessThan(200e6);
    }
  });

  it('gives no readings of NULs', async () => {
    const text = 'time,export\n2026-01-01T00:00Z,1\0\0\n\0\0\0\0\n2026-01-01T00:30Z,0.25\n';
    const { result, readings } = await read(text, planOf());
    expect(readings[0]).toEqual(PLAIN_READINGS.slice(1));
    expect(result.rows).toMatchObject({ read: 3, rejected: 2 });
  });

  it('says how many bytes it has read', async () => {
    const seen: number[] = [];
    const bytes = new TextEncoder().encode(PLAIN);
    await readLog(
      pieces(bytes, 20),
      planOf(),
      { timeZone: 'UTC' },
      {
        layer() {},
        rejected() {},
        progress: (n) => void seen.push(n),
      },
    );
    expect(seen.at(-1)).toBe(bytes.length);
  });
});
