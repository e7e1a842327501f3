import fc from 'fast-check';
import { describe, expect, it, vi } from 'vitest';
import type { Day } from '../../../../shared/api/day.ts';
import { deriveDays } from '../../../../shared/energy/derive.ts';
import type { LogLayer } from '../../../../shared/energy/layer.ts';
import { effectiveTraces } from '../../../../shared/energy/trace.ts';
import { civilRange, zoneOf } from '../../../../shared/time/zone.ts';
import type { Kind } from '../../../../shared/units/channels.ts';
import { DAY, homeIn, logOf, type Row, utc, type Written } from './logs.ts';
import { addedUp, type OracleLog } from './oracle.ts';

vi.setConfig({ testTimeout: 60_000 });

const START = utc('2026-03-28');
const ZONES = ['Europe/London', 'Australia/Adelaide', 'America/New_York', 'Asia/Kolkata'];
const DATES = civilRange('2026-03-27', '2026-03-30');

function days(layers: readonly LogLayer[], timeZone = 'Europe/London'): Day[] {
  return deriveDays({ traces: effectiveTraces(layers), dates: DATES, home: homeIn(timeZone) });
}

/** Rows about `interval` seconds apart, here and there a hole, all on ticks of ten seconds. */
const rowsOf = (interval: number, hours: number, register: boolean): fc.Arbitrary<Row[]> =>
  fc
    .array(
      fc.record({
        ticks: fc.oneof(
          { weight: 20, arbitrary: fc.constant(interval / 10) },
          { weight: 4, arbitrary: fc.integer({ min: 1, max: (2 * interval) / 10 }) },
          { weight: 2, arbitrary: fc.integer({ min: 1, max: 700 }) },
        ),
        value: fc.integer({ min: 0, max: 3000 }),
      }),
      { minLength: 2, maxLength: Math.min(150, Math.ceil((hours * 3600) / interval)) },
    )
    .map((steps) => {
      let t = START + 3_600_000;
      let held = 1000;
      return steps.map(({ ticks, value }): Row => {
        t += ticks * 10_000;
        held += value / 100_000;
        return [t, register ? held : value];
      });
    });

interface Sort {
  kind: Kind;
  stamp: 'start' | 'end' | 'instant';
  hold: 'toNext' | null;
}
const SORTS: Sort[] = [
  { kind: 'power', stamp: 'start', hold: null },
  { kind: 'power', stamp: 'end', hold: null },
  { kind: 'power', stamp: 'instant', hold: null },
  { kind: 'power', stamp: 'instant', hold: 'toNext' },
  { kind: 'energy', stamp: 'start', hold: null },
  { kind: 'energy', stamp: 'end', hold: null },
  { kind: 'register', stamp: 'instant', hold: null },
];

const one = fc.record({ sort: fc.constantFrom(...SORTS), interval: fc.constantFrom(60, 300, 900, 1800) }).chain((c) =>
  rowsOf(c.interval, 40, c.sort.kind === 'register').map((rows): Written => ({
    channel: 'export',
    ...c.sort,
    intervalSeconds: c.interval,
    scale: 5,
    rows: c.sort.kind === 'energy' ? rows.map(([t, v]) => [t, v / 1000]) : rows,
  })),
);

function shuffled<T>(list: readonly T[], order: readonly number[]): T[] {
  return list
    .map((entry, i) => [order[i % order.length] + i / 1e6, entry] as const)
    .sort((a, b) => a[0] - b[0])
    .map(([, entry]) => entry);
}

describe('one log', () => {
  it('comes to the same kWh and coverage by day as rows looked up tick by tick, in four zones', () => {
    fc.assert(
      fc.property(one, fc.constantFrom(...ZONES), (log, timeZone) => {
        const zone = zoneOf(timeZone);
        for (const day of days(logOf(1, log), timeZone)) {
          const { start, end } = zone.dayBounds(day.date);
          const theirs = addedUp([{ ...log, log: 1 }], start, end);
          if (theirs.kwh === null) expect(day.exportKwh).toBeNull();
          else expect(day.exportKwh).toBeCloseTo(theirs.kwh, 5);
          expect(day.coverage.export ?? 0).toBeCloseTo(theirs.coverage, 5);
        }
      }),
      { numRuns: 150 },
    );
  });
});

/** Logs with readings of their own: nothing that could be joined at a seam, so that the bare rule of spans shows. */
const disagreeing = fc
  .array(
    fc
      .record({ interval: fc.constantFrom(60, 100, 300, 900), shift: fc.integer({ min: 0, max: 4000 }) })
      .chain((c) => rowsOf(c.interval, 12, false).map((rows) => ({ ...c, rows }))),
    { minLength: 2, maxLength: 4 },
  )
  .map((list) =>
    list.map(({ interval, shift, rows }, i): OracleLog => ({
      log: i,
      channel: 'export',
      kind: 'power',
      // Each of another sort, so that readings of two logs are never neighbours.
      ...(['start', 'end', 'instant', 'start'] as const).map((stamp) => ({ stamp }))[i],
      hold: null,
      intervalSeconds: interval,
      rows: rows.map(([t, v]) => [t + shift * 10_000, v]),
    })),
  );

describe('several logs of one channel', () => {
  it('speak alone where the rule of spans lets them, as an instant-by-instant reading of the rule has it', () => {
    fc.assert(
      fc.property(disagreeing, (logs) => {
        // The fourth is of the first one's sort: keep them apart.
        const list = logs.slice(0, 3);
        const zone = zoneOf('Europe/London');
        for (const day of days(list.flatMap(({ log, ...written }) => logOf(log, written)))) {
          const { start, end } = zone.dayBounds(day.date);
          const theirs = addedUp(list, start, end);
          if (theirs.kwh === null) expect(day.exportKwh).toBeNull();
          else expect(day.exportKwh).toBeCloseTo(theirs.kwh, 5);
          expect(day.coverage.export ?? 0).toBeCloseTo(theirs.coverage, 5);
        }
      }),
      { numRuns: 120 },
    );
  });

  it('give the same days whatever the order of the layers in the list', () => {
    fc.assert(
      fc.property(disagreeing, fc.array(fc.integer(), { minLength: 9, maxLength: 9 }), (logs, order) => {
        const layers = logs.flatMap(({ log, ...written }) => logOf(log, written));
        expect(days(shuffled(layers, order))).toEqual(days(layers));
      }),
      { numRuns: 60 },
    );
  });
});

/** A log cut into files; each takes `overlap` rows of the one before. */
function cutUp(log: Written, cuts: readonly number[], overlap: number): Written[] {
  const at = [...new Set(cuts.map((cut) => 1 + (cut % Math.max(1, log.rows.length - 1))))].sort((a, b) => a - b);
  const bounds = [0, ...at, log.rows.length];
  return bounds.slice(1).map((to, i) => ({ ...log, rows: log.rows.slice(Math.max(0, bounds[i] - overlap), to) }));
}

describe('one log cut into files', () => {
  const cuts = fc.array(fc.nat(200), { minLength: 1, maxLength: 5 });
  const order = fc.shuffledSubarray([0, 1, 2, 3, 4, 5], { minLength: 6 });

  it('gives the days of the whole to the last digit, in any order, when the files overlap by a row or more', () => {
    fc.assert(
      fc.property(one, cuts, fc.integer({ min: 1, max: 6 }), order, (log, at, overlap, accepted) => {
        const whole = days(logOf(0, log));
        const parts = cutUp(log, at, overlap).flatMap((part, i) => logOf(accepted[i], part));
        expect(days(parts)).toEqual(whole);
      }),
      { numRuns: 200 },
    );
  });

  it('gives the days of the whole to the last digit also when they only meet, for all but amounts', () => {
    fc.assert(
      fc.property(
        one.filter(({ kind }) => kind !== 'energy'),
        cuts,
        order,
        (log, at, accepted) => {
          const whole = days(logOf(0, log));
          const parts = cutUp(log, at, 0).flatMap((part, i) => logOf(accepted[i], part));
          expect(days(parts)).toEqual(whole);
        },
      ),
      { numRuns: 200 },
    );
  });

  it('changes nothing when the whole comes again, before or after', () => {
    fc.assert(
      fc.property(one, cuts, order, (log, at, accepted) => {
        const whole = days(logOf(9, log));
        const parts = cutUp(log, at, 2).flatMap((part, i) => logOf(accepted[i], part));
        expect(days([...parts, ...logOf(9, log)])).toEqual(whole);
        expect(days([...parts, ...logOf(-1, log)])).toEqual(whole);
      }),
      { numRuns: 100 },
    );
  });
});

describe('the same use written three ways', () => {
  it('comes to the same kWh as means, amounts and a register, with and without their first and last day', () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: 0, max: 3000 }), { minLength: 96, maxLength: 288 }),
        fc.constantFrom(...ZONES),
        (watts, timeZone) => {
          const step = 900_000;
          const t = (i: number): number => START + i * step;
          const kwh = watts.map((w) => w / 4000);
          let held = 7;
          const counted = [7, ...kwh.map((k) => (held += k))];
          const written: Written[] = [
            { channel: 'export', kind: 'power', rows: watts.map((w, i) => [t(i), w]), intervalSeconds: 900 },
            { channel: 'export', kind: 'energy', rows: kwh.map((k, i) => [t(i), k]), scale: 6, intervalSeconds: 900 },
            {
              channel: 'export',
              kind: 'energy',
              stamp: 'end',
              rows: kwh.map((k, i) => [t(i + 1), k]),
              scale: 6,
              intervalSeconds: 900,
            },
            {
              channel: 'export',
              kind: 'register',
              rows: counted.map((k, i) => [t(i), k]),
              scale: 6,
              intervalSeconds: 900,
            },
          ];
          const [first, ...others] = written.map((log) => days(logOf(1, log), timeZone));
          for (const other of others)
            other.forEach((day, i) => {
              expect(day.coverage).toEqual(first[i].coverage);
              if (first[i].exportKwh === null) expect(day.exportKwh).toBeNull();
              else expect(day.exportKwh).toBeCloseTo(Number(first[i].exportKwh), 4);
            });
          const total = first.reduce((sum, day) => sum + (day.exportKwh ?? 0), 0);
          const inside = watts.filter((_, i) => t(i) < zoneOf(timeZone).dayBounds('2026-03-31').start).length;
          expect(total).toBeCloseTo(
            kwh.slice(0, inside).reduce((a, b) => a + b, 0),
            4,
          );
        },
      ),
      { numRuns: 40 },
    );
  });
});

it('a day is the same whether its month is taken whole or in pieces with their margin', () => {
  const rows: Row[] = [];
  let held = 5;
  for (let t = START - 20 * DAY; t < START + 20 * DAY; t += 7_000_000) rows.push([t, (held += (t % 977) / 1000)]);
  const layers = [
    ...logOf(1, { channel: 'import', kind: 'register', rows }),
    ...logOf(2, {
      channel: 'relay',
      kind: 'state',
      hold: 'toNext',
      scale: 0,
      rows: rows.map(([t], i) => [t + 1e6, i % 2]),
    }),
  ];
  const home = homeIn('Europe/London');
  const dates = civilRange('2026-03-20', '2026-04-05');
  const whole = deriveDays({ traces: effectiveTraces(layers), dates, home });
  dates.forEach((date, i) => {
    const day = Math.floor(Date.parse(`${date}T00:00Z`) / DAY);
    const near = layers.filter(({ utcDay }) => Math.abs(utcDay - day) <= 2);
    expect(deriveDays({ traces: effectiveTraces(near), dates: [date], home })).toEqual([whole[i]]);
  });
});
