import { format as write, isValid, parse, parseISO } from 'date-fns';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { LogRefused } from '../../../../shared/columns/refusal.ts';
import { stampReader } from '../../../../shared/columns/stamp.ts';

const seconds = fc.integer({ min: Date.UTC(1990, 0, 1) / 1000, max: Date.UTC(2060, 0, 1) / 1000 });
/** A civil time as a date whose local parts show it, for date-fns. */
const civilDate = (ms: number): Date => {
  const d = new Date(ms);
  return new Date(
    d.getUTCFullYear(),
    d.getUTCMonth(),
    d.getUTCDate(),
    d.getUTCHours(),
    d.getUTCMinutes(),
    d.getUTCSeconds(),
  );
};
const civilOf = (d: Date): number =>
  Date.UTC(d.getFullYear(), d.getMonth(), d.getDate(), d.getHours(), d.getMinutes(), d.getSeconds());

describe('stampReader', () => {
  it.each([
    'dd.MM.yyyy HH:mm',
    'dd/MM/yyyy HH:mm:ss',
    'd/M/yyyy H:mm',
    'MM/dd/yyyy hh:mm:ss a',
    'M/d/yy h:mm a',
    'yyyy/MM/dd HH:mm',
    'yyyyMMddHHmm',
    'yyyyMMdd HHmmss',
    "yyyy-MM-dd'T'HH:mm:ss",
    'd MMM yyyy HH:mm',
    'EEEE, d MMMM yyyy HH:mm',
    'dd-MMM-yy HH.mm.ss',
    'do MMMM yyyy, HH:mm',
  ])('reads what date-fns writes as %s', (format) => {
    const reader = stampReader(format);
    const unit = format.includes('s') ? 1000 : 60_000;
    fc.assert(
      fc.property(seconds, (s) => {
        const ms = Math.floor((s * 1000) / unit) * unit;
        expect(reader.read(write(civilDate(ms), format))).toBe(true);
        expect(reader.ms).toBe(ms);
        expect(reader.zoned).toBe(false);
      }),
    );
  });

  it.each(['dd.MM.yyyy HH:mm', 'MM/dd/yyyy hh:mm a', 'd MMM yyyy HH:mm:ss'])(
    'refuses in %s what date-fns refuses, and reads the rest alike',
    (format) => {
      const reader = stampReader(format);
      const damaged = fc
        .tuple(seconds, fc.nat(30), fc.constantFrom('', '0', '3', '9', '.', ' ', 'x'))
        .map(([s, at, char]) => {
          const text = write(civilDate(s * 1000), format);
          return text.slice(0, at) + char + text.slice(at + 1);
        });
      fc.assert(
        fc.property(damaged, (text) => {
          // The platform's Date takes the years 0 to 99 as 1900 to 1999.
          fc.pre(!/\b00\d\d\b/.test(text));
          // Runs of blanks count as one, and blanks at the ends as none.
          const oracle = parse(text.replace(/ +/g, ' ').trim(), format, new Date(2000, 0, 1));
          const understood = reader.read(text);
          // Ours is the stricter: years have four digits. What it reads is what date-fns reads.
          if (understood && !/24:00/.test(text)) expect(isValid(oracle)).toBe(true);
          if (understood && isValid(oracle)) expect(reader.ms).toBe(civilOf(oracle));
        }),
        { numRuns: 500 },
      );
    },
  );

  it('reads ISO as date-fns does, with and without offset', () => {
    const reader = stampReader('iso');
    const offset = fc.constantFrom('', 'Z', '+01:00', '-0330', '+05', '+12:45');
    const form = fc.constantFrom(10, 16, 19, 23);
    fc.assert(
      fc.property(seconds, offset, form, fc.boolean(), (s, suffix, length, blank) => {
        let text = new Date(s * 1000 + 125).toISOString().slice(0, length);
        if (blank) text = text.replace('T', ' ');
        if (length > 10) text += suffix;
        expect(reader.read(text)).toBe(true);
        const oracle = parseISO(text);
        const zoned = length > 10 && suffix !== '';
        expect(reader.zoned).toBe(zoned);
        expect(reader.ms - (length === 23 ? 125 : 0)).toBe(
          zoned ? oracle.getTime() - (length === 23 ? 125 : 0) : civilOf(oracle),
        );
      }),
    );
  });

  it.each([
    [
      'iso',
      '2026-02-30T00:00',
      '2026-13-01T00:00',
      '2026-01-01T25:00',
      '2026-01-01T24:01',
      '2026-1-1',
      'yesterday',
      '2026-01-01T00:60',
    ],
    ['dd.MM.yyyy HH:mm', '31.02.2026 00:00', '2026-01-01 00:00', '01.01.26 00:00', '01.01.2026', '01.01.2026 00:00 x'],
    ['epochSeconds', '2026-01-01', '-5', '1e9', ''],
    ['excelSerial', '7', '46000.5.5', '2026'],
  ])('refuses as %s what is no such time', (format, ...texts) => {
    const reader = stampReader(format);
    for (const text of texts) expect(reader.read(text), text).toBe(false);
  });

  it('reads epochs, spreadsheet days, the day’s end and months in six languages', () => {
    const time = (format: string, text: string, decimal = '.'): string => {
      const reader = stampReader(format, decimal);
      expect(reader.read(text), text).toBe(true);
      return new Date(reader.ms).toISOString();
    };
    expect(time('epochSeconds', '1453806000')).toBe('2016-01-26T11:00:00.000Z');
    expect(time('epochSeconds', '1453806000.5')).toBe('2016-01-26T11:00:00.500Z');
    expect(time('epochMilliseconds', '1453806000000')).toBe('2016-01-26T11:00:00.000Z');
    // 2020-01-01 is day 43831 of the 1900 date system (common practice of spreadsheets; from memory).
    expect(time('excelSerial', '43831')).toBe('2020-01-01T00:00:00.000Z');
    expect(time('excelSerial', '43831,0104166667', ',')).toBe('2020-01-01T00:15:00.000Z');
    expect(time('dd.MM.yyyy HH:mm', '31.12.2025 24:00')).toBe('2026-01-01T00:00:00.000Z');
    for (const month of ['Mai', 'mayo', 'maggio', 'mei', 'May', 'mai'])
      expect(time('d MMMM yyyy', `5 ${month} 2026`)).toBe('2026-05-05T00:00:00.000Z');
    expect(time('dd/MM/yyyy hh:mm a', '01/06/2026 12:05 am')).toBe('2026-06-01T00:05:00.000Z');
    expect(time('dd/MM/yyyy hh:mm a', '01/06/2026 12:05 p.m.')).toBe('2026-06-01T12:05:00.000Z');
  });

  it('refuses formats that say too little or that it does not know', () => {
    expect(() => stampReader('HH:mm')).toThrow(LogRefused);
    expect(() => stampReader('yyyy QQQ')).toThrow(/"QQQ"/);
  });
});
