import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  parseClock,
  parseDate,
  parseNumber,
  parsePrice,
  parseShare,
} from '../../../../src/components/records/parse.ts';

const wide = { min: -1e9, max: 1e9 };
const value = <T>(parsed: { ok: true; value: T } | { ok: false; message: string }): T | string =>
  parsed.ok ? parsed.value : parsed.message;

describe('parseNumber', () => {
  it.each([
    ['1,234.5', 1234.5],
    ['1.234,5', 1234.5],
    ['1 234,5', 1234.5],
    ['1\u202f234,5', 1234.5],
    ['1’234.5', 1234.5],
    ['0,15', 0.15],
    [',5', 0.5],
    ['.5', 0.5],
    ['12', 12],
    [' 7. ', 7],
    ['−3', -3],
    ['1,234,567', 1234567],
    ['1.234.567', 1234567],
    ['0,234', 0.234],
  ])('reads %s as %d', (text, expected) => {
    expect(value(parseNumber(text, wide))).toBe(expected);
  });

  it('takes the unit behind the number', () => {
    expect(value(parseNumber('210 litres', { min: 20, max: 2000, unit: 'litres', units: ['l'] }))).toBe(210);
    expect(value(parseNumber('210l', { min: 20, max: 2000, unit: 'litres', units: ['l'] }))).toBe(210);
    expect(value(parseNumber('2,8 kW', { min: 0, max: 30, unit: 'kW' }))).toBe(2.8);
  });

  it('lets the bounds decide what one comma before three digits means', () => {
    expect(value(parseNumber('1,234', { min: 20, max: 2000 }))).toBe(1234);
    expect(value(parseNumber('1,234', { min: 0, max: 60 }))).toBe(1.234);
  });

  it('asks when both meanings are within the bounds', () => {
    expect(value(parseNumber('1,234', wide))).toMatch(/can mean 1\.234 or 1234|can mean 1234 or 1\.234/);
  });

  it.each(['', 'abc', '1,2,3', '12,34.5', '1.2.3', '--4', 'NaN', 'Infinity', '1e5', '3 4'])('refuses %j', (text) => {
    expect(parseNumber(text, wide).ok).toBe(false);
  });

  it('says the bounds when the number is out of them', () => {
    expect(value(parseNumber('5', { min: 20, max: 2000, unit: 'litres' }))).toBe(
      '5 is out of range: from 20 to 2000 litres.',
    );
  });

  it('reads back every number as the field would show it', () => {
    fc.assert(
      fc.property(fc.integer({ min: -99999999, max: 99999999 }), fc.integer({ min: 0, max: 6 }), (digits, places) => {
        const expected = Number((digits / 10 ** places).toFixed(places));
        expect(value(parseNumber(expected.toFixed(places), wide))).toBe(expected);
      }),
    );
  });

  it('reads what two locales write, from the runtime’s own formatter', () => {
    fc.assert(
      fc.property(fc.integer({ min: 100000, max: 999999999 }), (cents) => {
        const amount = cents / 100;
        for (const locale of ['en-GB', 'de-DE', 'fr-FR', 'de-CH']) {
          const text = new Intl.NumberFormat(locale, { minimumFractionDigits: 2 }).format(amount);
          expect(value(parseNumber(text, wide)), `${locale} ${text}`).toBe(amount);
        }
      }),
    );
  });
});

describe('parseShare', () => {
  it.each([
    ['85', 0.85],
    ['85 %', 0.85],
    ['85,5%', 0.855],
    ['0.85', 0.85],
    ['0,85', 0.85],
    ['1.05', 1.05],
    ['105', 1.05],
  ])('reads %s', (text, expected) => expect(value(parseShare(text, 0.3, 1.1))).toBe(expected));
  it.each(['850', '2', '', 'good'])('refuses %j', (text) => expect(parseShare(text, 0.3, 1.1).ok).toBe(false));
});

describe('parsePrice', () => {
  it.each([
    ['0.245', 0.245],
    ['0,245', 0.245],
    ['£0.245', 0.245],
    ['0,2450 €', 0.245],
    ['24.5p', 0.245],
    ['24,5 ct/kWh', 0.245],
    ['24.5 pence per kWh', 0.245],
    ['15p', 0.15],
    ['-0.02', -0.02],
    ['1,234', 1.234],
    ['0', 0],
  ])('reads %s', (text, expected) => expect(value(parsePrice(text))).toBe(expected));
  it.each(['', 'free', '12.3.4'])('refuses %j', (text) => expect(parsePrice(text).ok).toBe(false));
});

describe('parseClock', () => {
  it.each([
    ['17:30', '17:30'],
    ['17.30', '17:30'],
    ['1730', '17:30'],
    ['17h30', '17:30'],
    ['5:30pm', '17:30'],
    ['5.30 p.m.', '17:30'],
    ['530pm', '17:30'],
    ['5pm', '17:00'],
    ['12am', '00:00'],
    ['12 pm', '12:00'],
    ['530', '05:30'],
    ['7:05', '07:05'],
    ['17', '17:00'],
    ['6h', '06:00'],
    ['noon', '12:00'],
    ['midnight', '00:00'],
    ['24:00', '00:00'],
    ['17:30:00', '17:30'],
  ])('reads %s', (text, expected) => expect(value(parseClock(text))).toBe(expected));
  it('ends a span at 24:00', () => {
    expect(value(parseClock('24:00', true))).toBe('24:00');
    expect(value(parseClock('midnight', true))).toBe('24:00');
  });
  it('asks for morning or evening', () => expect(value(parseClock('6'))).toMatch(/6:00 or 6 pm/));
  it.each(['', '25:00', '17:60', '13pm', 'soon', '24:01', '17:3'])('refuses %j', (text) =>
    expect(parseClock(text).ok).toBe(false),
  );
  it('reads back every minute of the day', () => {
    for (let minute = 0; minute < 1440; minute += 1) {
      const text = `${String(Math.floor(minute / 60)).padStart(2, '0')}:${String(minute % 60).padStart(2, '0')}`;
      expect(value(parseClock(text))).toBe(text);
      expect(value(parseClock(text.replace(':', '.')))).toBe(text);
    }
  });
});

describe('parseDate', () => {
  it.each([
    ['2026-03-01', '2026-03-01'],
    ['1.3.2026', '2026-03-01'],
    ['01/03/2026', '2026-03-01'],
    ['29/02/2024', '2024-02-29'],
  ])('reads %s', (text, expected) => expect(value(parseDate(text))).toBe(expected));
  it.each(['', '29/02/2026', '2026-13-01', '31.04.2026', 'yesterday'])('refuses %j', (text) =>
    expect(parseDate(text).ok).toBe(false),
  );
});
