import { addDays as addDaysOracle, differenceInCalendarDays, format, isValid, parse } from 'date-fns';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  addDays,
  civilDay,
  civilOfDay,
  civilRange,
  dayNumber,
  daysBetween,
  daysInMonth,
  isCivil,
} from '../../../../shared/time/civil.ts';

const days = fc.integer({ min: -20_000, max: 60_000 });

describe('civil dates', () => {
  it('agree with date-fns on sums and differences of days', () => {
    fc.assert(
      fc.property(days, fc.integer({ min: -5000, max: 5000 }), (day, n) => {
        const civil = civilOfDay(day);
        const date = parse(civil, 'yyyy-MM-dd', new Date(2000, 0, 1));
        expect(addDays(civil, n)).toBe(format(addDaysOracle(date, n), 'yyyy-MM-dd'));
        expect(daysBetween(civil, addDays(civil, n))).toBe(differenceInCalendarDays(addDaysOracle(date, n), date));
        expect(civilDay(civil)).toBe(day);
      }),
    );
  });

  it('count days as the platform calendar does', () => {
    fc.assert(
      fc.property(days, (day) => {
        const date = new Date(day * 86_400_000);
        expect(dayNumber(date.getUTCFullYear(), date.getUTCMonth() + 1, date.getUTCDate())).toBe(day);
        const last = new Date(Date.UTC(date.getUTCFullYear(), date.getUTCMonth() + 1, 0)).getUTCDate();
        expect(daysInMonth(date.getUTCFullYear(), date.getUTCMonth() + 1)).toBe(last);
      }),
    );
  });

  it('are told from what the calendar does not have', () => {
    const text = fc
      .tuple(fc.integer({ min: 1900, max: 2100 }), fc.integer({ min: 0, max: 14 }), fc.integer({ min: 0, max: 33 }))
      .map(([y, m, d]) => `${y}-${String(m).padStart(2, '0')}-${String(d).padStart(2, '0')}`);
    fc.assert(
      fc.property(text, (civil) => {
        expect(isCivil(civil)).toBe(isValid(parse(civil, 'yyyy-MM-dd', new Date(2000, 0, 1))));
      }),
    );
    expect(() => civilDay('1 May 2026')).toThrow(RangeError);
  });

  it('make a range with both ends, across a leap day', () => {
    expect(civilRange('2024-02-28', '2024-03-01')).toEqual(['2024-02-28', '2024-02-29', '2024-03-01']);
    expect(civilRange('2024-03-01', '2024-02-28')).toEqual([]);
  });
});
