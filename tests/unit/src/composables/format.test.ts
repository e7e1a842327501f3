import { describe, expect, it } from 'vitest';
import {
  civil,
  civilSpan,
  clock,
  counted,
  localeOf,
  money,
  number,
  percent,
  said,
  shown,
  UNKNOWN,
  withUnit,
} from '../../../../src/composables/format.ts';

const plain = (text: string): string => text.replace(/[\u00a0\u202f\u2009]/g, ' ');

describe('numbers', () => {
  it.each([
    [0, '0'],
    [0.4234, '0.42'],
    [4.2149, '4.21'],
    [9.996, '10.0'],
    [42.149, '42.1'],
    [99.96, '100'],
    [1234.4, '1,234'],
    [-3.456, '-3.46'],
    [-0.0001, '0.00'],
  ])('%s is written %s', (value, text) => expect(number(value)).toBe(text));

  it('a value that is not known is said so, never a zero', () => {
    expect(withUnit(null, 'kWh')).toBe(UNKNOWN);
    expect(said('divertedKwh', null, 'GBP')).toBe(UNKNOWN);
  });
  it('a unit does not leave its number', () => expect(withUnit(3, 'kWh')).toBe('3.00\u00a0kWh'));
  it('shares are per cent, with a decimal where small', () => {
    expect(plain(percent(0.613))).toBe('61 %');
    expect(plain(percent(0.0523))).toBe('5.2 %');
    expect(plain(percent(0))).toBe('0 %');
    expect(plain(percent(1))).toBe('100 %');
  });
  it('money carries its currency, keeps its sign, and nothing has none', () => {
    expect(money(3.5, 'GBP')).toBe('£3.50');
    expect(money(-3.5, 'GBP')).toBe('-£3.50');
    expect(money(-0.001, 'GBP')).toBe('£0.00');
  });
  it('figures take the unit of their name', () => {
    expect(shown('gasDisplacedM3', 3.57, null)).toEqual({ value: '3.57', unit: 'm³' });
    expect(shown('litresAt40', 151.4, null)).toEqual({ value: '151', unit: 'litres' });
    expect(shown('solarFraction', 0.61, null)).toEqual({ value: '61', unit: '%' });
  });
  it('counts agree with their noun', () => {
    expect(counted(1, 'day')).toBe('1 day');
    expect(counted(2, 'property', 'properties')).toBe('2 properties');
  });
});

describe('dates', () => {
  it('a civil date is the same day wherever it is read', () => {
    expect(civil('2026-11-23', 'spoken')).toMatch(/Monday,? (23 November|November 23)/);
    expect(civil('2026-01-01')).toMatch(/2026/);
  });
  it('a span says once what its ends share', () => {
    expect(civilSpan('2026-11-23', '2026-11-29').match(/2026/g)).toHaveLength(1);
  });
  it('clock times are those of the property’s zone, midnight 00:00', () => {
    expect(clock(Date.UTC(2026, 6, 1, 11, 30), 'Europe/London')).toBe('12:30');
    expect(clock(Date.UTC(2026, 6, 1, 23, 0), 'Europe/London')).toBe('00:00');
  });
  it('takes the reader’s English, else that of Great Britain', () => {
    expect(localeOf(['de-DE', 'en-AU'])).toBe('en-AU');
    expect(localeOf(['de-DE'])).toBe('en-GB');
  });
});
