import { tzOffset } from '@date-fns/tz';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { civilRange, fixedOffset, isZone, zoneOf } from '../../../../shared/time/zone.ts';

const ZONES = [
  'Europe/London',
  'Europe/Berlin',
  'Australia/Lord_Howe', // half-hour change, southern hemisphere
  'Pacific/Chatham', // +12:45 / +13:45
  'America/St_Johns', // -03:30; until 2011 clocks changed at 00:01
  'America/Sao_Paulo', // until 2019 midnight was left out in spring
  'Africa/Casablanca', // two changes within a month
  'Asia/Kathmandu', // +05:45, never changes
];

const instants = fc
  .integer({ min: Date.UTC(1990, 0, 1) / 1000, max: Date.UTC(2037, 0, 1) / 1000 })
  .map((s) => s * 1000);

/** Independent oracle: the offset of @date-fns/tz, in milliseconds. */
const oracle = (zone: string, utc: number): number => tzOffset(zone, new Date(utc)) * 60_000;

/** Naive oracle: every instant, by quarter hours around the guess, at which the zone shows the civil time. */
function candidatesByTrying(zone: string, local: number): number[] {
  const found: number[] = [];
  for (let quarter = -16 * 4; quarter <= 16 * 4; quarter++) {
    const utc = local + quarter * 900_000;
    if (utc + oracle(zone, utc) === local) found.push(utc);
  }
  return found;
}

describe('zoneOf', () => {
  it.each(ZONES)('gives the offsets of an independent library in %s', (name) => {
    const zone = zoneOf(name);
    fc.assert(
      fc.property(instants, (utc) => {
        expect(zone.offsetAt(utc)).toBe(oracle(name, utc));
      }),
      { numRuns: 300 },
    );
  });

  it.each(ZONES)('finds every instant of a civil time, near changes too, in %s', (name) => {
    const zone = zoneOf(name);
    const nearChange = fc.tuple(instants, fc.integer({ min: -12, max: 12 })).map(([utc, quarter]) => {
      const span = zone.spanAt(utc);
      const at = Number.isFinite(span.from) ? span.from : utc;
      return Math.round((at + span.offset) / 900_000 + quarter) * 900_000;
    });
    fc.assert(
      fc.property(
        fc.oneof(
          nearChange,
          instants.map((utc) => Math.round(utc / 900_000) * 900_000),
        ),
        (local) => {
          expect(zone.localToUtc(local)).toEqual(candidatesByTrying(name, local));
        },
      ),
      { numRuns: 200 },
    );
  });

  it.each(['Europe/London', 'America/Sao_Paulo', 'America/St_Johns', 'Australia/Lord_Howe'])(
    'cuts two years of %s into days without gap or overlap, each holding its own instants',
    (name) => {
      const zone = zoneOf(name);
      let end: number | null = null;
      for (const civil of civilRange('2010-01-01', '2011-12-31')) {
        const day = zone.dayBounds(civil);
        if (end !== null) expect(day.start).toBe(end);
        end = day.end;
        expect(day.hours).toBeGreaterThanOrEqual(23);
        expect(zone.civilOf(day.start)).toBe(civil);
        expect(zone.civilOf(day.end - 1)).toBe(civil);
        expect(zone.civilOf(day.start - 1) < civil).toBe(true);
      }
    },
  );

  it('begins a day whose midnight is left out with its first instant', () => {
    // America/Sao_Paulo 2018-11-04: clocks went from 00:00 -03:00 to 01:00 -02:00 (IANA time zone database).
    const day = zoneOf('America/Sao_Paulo').dayBounds('2018-11-04');
    expect(new Date(day.start).toISOString()).toBe('2018-11-04T03:00:00.000Z');
    expect(day.hours).toBe(23);
    expect(zoneOf('America/Sao_Paulo').localToUtc(Date.UTC(2018, 10, 4, 0, 30))).toEqual([]);
  });

  it('gives a date that a zone left out no hours', () => {
    // Samoa moved over the date line: there was no 30 December 2011 (IANA time zone database).
    expect(zoneOf('Pacific/Apia').dayBounds('2011-12-30').hours).toBe(0);
  });

  it('knows UTC and fixed offsets, and refuses other names', () => {
    expect(zoneOf('UTC').offsetAt(0)).toBe(0);
    expect(zoneOf('+10:00').localToUtc(0)).toEqual([-36_000_000]);
    expect(zoneOf('-03:30').civilOf(0)).toBe('1969-12-31');
    expect(fixedOffset('+0530')).toBe(19_800_000);
    expect(fixedOffset('+25:00')).toBeNull();
    expect(isZone('Nowhere/Else')).toBe(false);
    expect(() => zoneOf('Nowhere/Else')).toThrow(/no time zone/);
  });
});
