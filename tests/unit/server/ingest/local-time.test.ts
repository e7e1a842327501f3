import { tzOffset } from '@date-fns/tz';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { planOf, read } from './reading.ts';

/** The civil time that clocks show, by an independent library. */
function shown(zone: string, utc: number): string {
  return new Date(utc + tzOffset(zone, new Date(utc)) * 60_000).toISOString().slice(0, 19);
}

function planIn(zone: string, stamp: 'start' | 'end' | 'instant' = 'start'): ReturnType<typeof planOf> {
  return planOf({ time: { columns: ['time'], format: 'iso', zone, stamp } });
}

const file = (rows: string[]): string => ['time,export', ...rows].join('\n') + '\n';

/** Starts two hours before a clock change of each zone (IANA time zone database, by way of @date-fns/tz). */
const CHANGES: [string, string][] = [
  ['Europe/London', '2026-10-24T22:00Z'],
  ['Europe/London', '2026-03-28T22:00Z'],
  ['Australia/Lord_Howe', '2026-04-04T12:00Z'], // half an hour, southern autumn
  ['Australia/Sydney', '2026-04-04T13:00Z'],
  ['Pacific/Chatham', '2026-09-26T11:00Z'],
  ['America/St_Johns', '2026-11-01T02:00Z'],
  ['America/Santiago', '2026-04-05T00:00Z'], // midnight comes twice
];

describe('local time', () => {
  it.each(CHANGES)(
    'of %s comes back as the instants that were written, oldest or newest first, from %s',
    async (zone, from) => {
      await fc.assert(
        fc.asyncProperty(
          fc.constantFrom(1, 5, 10, 15, 30),
          fc.boolean(),
          fc.integer({ min: 1, max: 2000 }),
          async (minutes, newestFirst, size) => {
            const instants = Array.from(
              { length: (8 * 60) / minutes },
              (_, i) => Date.parse(from) + i * minutes * 60_000,
            );
            const rows = instants.map((t, i) => `${shown(zone, t)},${i}`);
            if (newestFirst) rows.reverse();
            const { readings, result } = await read(file(rows), planIn(zone), { size });
            expect(readings[0]).toEqual(instants.map((t, i) => [t, i]));
            expect(result.problems).toEqual([]);
          },
        ),
        { numRuns: 25 },
      );
    },
  );

  it('finds both passes of the repeated hour in hourly rows', async () => {
    const rows = ['00:00', '01:00', '01:00', '02:00'].map((t, i) => `2026-10-25T${t},${i}`);
    const { readings, result } = await read(file(rows), planIn('Europe/London'));
    expect(readings[0].map(([t]) => new Date(t).toISOString().slice(11, 16))).toEqual([
      '23:00',
      '00:00',
      '01:00',
      '02:00',
    ]);
    expect(result.problems).toEqual([]);
  });

  it('takes ends of the first pass that are written as the hour after it', async () => {
    // Labels made by adding the interval to the start: 02:00 stands for the end of the first pass and of the second.
    const rows = ['01:00', '01:30', '02:00', '01:30', '02:00', '02:30'].map((t, i) => `2026-10-25T${t},${i}`);
    const { readings } = await read(file(rows), planIn('Europe/London', 'end'));
    expect(readings[0].map(([t]) => new Date(t).toISOString().slice(11, 16))).toEqual([
      '00:00',
      '00:30',
      '01:00',
      '01:30',
      '02:00',
      '02:30',
    ]);
  });

  it('takes a repeated hour that was recorded once as the first pass and tells it', async () => {
    const rows = ['00:30', '01:00', '01:30', '02:00'].map((t, i) => `2026-10-25T${t},${i}`);
    const { readings, result } = await read(file(rows), planIn('Europe/London'));
    expect(readings[0].map(([t]) => new Date(t).toISOString().slice(11, 16))).toEqual([
      '23:30',
      '00:00',
      '00:30',
      '02:00',
    ]);
    expect(result.problems).toMatchObject([{ count: 2, line: null }]);
    const inside = await read(file(rows.slice(1)), planIn('Europe/London'));
    expect(new Date(inside.readings[0][0][0]).toISOString()).toBe('2026-10-25T00:00:00.000Z');
    expect(inside.result.problems).toHaveLength(1);
  });

  it('rejects a local time that does not exist, with that reason', async () => {
    const rows = ['00:30', '01:00', '01:30', '02:00'].map((t, i) => `2026-03-29T${t},${i}`);
    const { rejected, result } = await read(file(rows), planIn('Europe/London'));
    expect(rejected.map(({ line }) => line)).toEqual([3, 4]);
    expect(rejected[0].reason).toMatch(/does not exist/);
    expect(result.rows).toEqual({ read: 4, accepted: 2, rejected: 2, unchanged: 0 });
  });

  it('lets an offset in the text win over the zone', async () => {
    const rows = ['2026-10-25T01:30:00+01:00,0', '2026-10-25T01:30:00+00:00,1', '2026-10-25T01:45Z,2'];
    const { readings } = await read(file(rows), planIn('America/St_Johns'));
    expect(readings[0].map(([t]) => new Date(t).toISOString().slice(11, 16))).toEqual(['00:30', '01:30', '01:45']);
  });

  it('reads 24:00 as the end of the day', async () => {
    const { readings } = await read(file(['2026-06-30T23:30,0', '2026-06-30T24:00,1']), planIn('Europe/London', 'end'));
    expect(new Date(readings[0][1][0]).toISOString()).toBe('2026-06-30T23:00:00.000Z');
  });

  it('tells the passes of the repeated hour apart for each name of a long file', async () => {
    const rows = ['00:30', '01:00', '01:30', '01:00', '01:30', '02:00'].flatMap((t, i) => [
      `2026-10-25T${t},a,${i}`,
      `2026-10-25T${t},b,${i}`,
    ]);
    const { readings } = await read(['time,name,value', ...rows].join('\n'), {
      ...planIn('Europe/London'),
      shape: { kind: 'long', nameColumn: 'name', valueColumn: 'value' },
      columns: [
        { column: 'a', channel: 'export', kind: 'energy', unit: 'kWh', sign: 1 },
        { column: 'b', channel: 'import', kind: 'energy', unit: 'kWh', sign: 1 },
      ],
    });
    for (const column of readings) {
      expect(column).toEqual(column.map((_, i) => [Date.parse('2026-10-24T23:30Z') + i * 1_800_000, i]));
      expect(column).toHaveLength(6);
    }
  });
});
