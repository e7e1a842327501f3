import { describe, expect, it } from 'vitest';
import { zoneOf } from '../../shared/time/zone.ts';

const london = zoneOf('Europe/London');
const iso = (ms: number): string => new Date(ms).toISOString().slice(0, 16) + 'Z';

/** The half-hour periods of a civil day, as starts. */
function periods(civil: string): string[] {
  const { start, hours } = london.dayBounds(civil);
  return Array.from({ length: hours * 2 }, (_, i) => iso(start + i * 1_800_000));
}

/** Directive 2000/84/EC arts 2-3; Summer Time Act 1972 as amended by SI 2002/262; GB settlement periods. */
describe('clock changes in Great Britain', () => {
  it('dst-s: 2026-03-29 has 23 hours, 46 half-hours', () => {
    const { start, end, hours } = london.dayBounds('2026-03-29');
    expect([iso(start), iso(end), hours]).toEqual(['2026-03-29T00:00Z', '2026-03-29T23:00Z', 23]);
    expect(periods('2026-03-29')).toHaveLength(46);
  });

  it('dst-l: 2026-10-25 has 25 hours, 50 half-hours', () => {
    const { start, end, hours } = london.dayBounds('2026-10-25');
    expect([iso(start), iso(end), hours]).toEqual(['2026-10-24T23:00Z', '2026-10-26T00:00Z', 25]);
    expect(periods('2026-10-25')).toHaveLength(50);
  });

  it('dst-n: 2026-06-21 has 24 hours, 48 half-hours', () => {
    const { start, end, hours } = london.dayBounds('2026-06-21');
    expect([iso(start), iso(end), hours]).toEqual(['2026-06-20T23:00Z', '2026-06-21T23:00Z', 24]);
    expect(periods('2026-06-21')).toHaveLength(48);
  });

  it('sp-long: on 2023-10-29 period 5 begins at 01:00Z and period 50 at 23:30Z', () => {
    expect(periods('2023-10-29')[4]).toBe('2023-10-29T01:00Z');
    expect(periods('2023-10-29')[49]).toBe('2023-10-29T23:30Z');
  });

  it('repeats 01:00 to 02:00 in autumn and leaves it out in spring', () => {
    expect(london.localToUtc(Date.UTC(2026, 9, 25, 1, 30)).map(iso)).toEqual([
      '2026-10-25T00:30Z',
      '2026-10-25T01:30Z',
    ]);
    expect(london.localToUtc(Date.UTC(2026, 2, 29, 1, 30))).toEqual([]);
  });
});
