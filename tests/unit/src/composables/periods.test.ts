import { describe, expect, it } from 'vitest';
import {
  addMonths,
  isoWeek,
  mondayOf,
  mondayOfWeek,
  monthSpan,
  weekdayOf,
  weekToOpen,
  yearSpan,
} from '../../../../src/composables/periods.ts';

describe('ISO weeks', () => {
  // Worked examples of ISO 8601 week dates at year ends, from Wikipedia “ISO week date” (from memory).
  it.each([
    ['1977-01-01', '1976-W53'],
    ['1977-01-02', '1976-W53'],
    ['1977-12-31', '1977-W52'],
    ['1978-01-01', '1977-W52'],
    ['1978-01-02', '1978-W01'],
    ['1979-12-31', '1980-W01'],
    ['1980-12-28', '1980-W52'],
    ['1981-12-31', '1981-W53'],
    ['2026-11-29', '2026-W48'],
  ])('%s lies in %s', (date, week) => expect(isoWeek(date)).toBe(week));

  it('a week begins on the Monday of the calendar of Intl', () => {
    const weekday = new Intl.DateTimeFormat('en-GB', { weekday: 'long', timeZone: 'UTC' });
    for (let i = 0; i < 800; i++) {
      const date = new Date(Date.UTC(2023, 11, 20) + i * 86_400_000).toISOString().slice(0, 10);
      const monday = mondayOf(date);
      expect(weekday.format(Date.parse(monday))).toBe('Monday');
      expect(mondayOfWeek(isoWeek(date))).toBe(monday);
      expect((Date.parse(date) - Date.parse(monday)) / 86_400_000).toBe(weekdayOf(date) - 1);
    }
  });
  it.each(['2026-W54', '2026-W00', '2025-W53', 'next', '2026-W1'])('%s is no week', (week) =>
    expect(mondayOfWeek(week)).toBeNull(),
  );
});

describe('the week to open with', () => {
  // 30 November 2026 is a Monday.
  it.each([
    ['a full week before and only Monday since', '2026-01-01', '2026-11-30', '2026-11-23'],
    ['logged up to Wednesday', '2026-01-01', '2026-12-02', '2026-11-23'],
    ['logged up to Thursday', '2026-01-01', '2026-12-03', '2026-11-30'],
    ['nothing before this week', '2026-11-30', '2026-12-01', '2026-11-30'],
    ['too little of the week before', '2026-11-28', '2026-12-01', '2026-11-30'],
  ])('%s', (_, first, last, monday) => expect(weekToOpen(first, last)).toBe(monday));
});

describe('months and years', () => {
  it('a month ends on its own last day', () => {
    expect(monthSpan('2024-02')).toEqual({ from: '2024-02-01', to: '2024-02-29' });
    expect(monthSpan('2026-12')).toEqual({ from: '2026-12-01', to: '2026-12-31' });
    expect(monthSpan('2026-13')).toBeNull();
  });
  it('months are counted over year ends', () => {
    expect(addMonths('2026-11', 3)).toBe('2027-02');
    expect(addMonths('2026-01', -1)).toBe('2025-12');
  });
  it('a year is four digits', () => {
    expect(yearSpan('2026')).toEqual({ from: '2026-01-01', to: '2026-12-31' });
    expect(yearSpan('26')).toBeNull();
  });
});
