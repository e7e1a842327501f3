import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import type { Day } from '../../shared/api/day.ts';
import { deriveDays } from '../../shared/energy/derive.ts';
import { totalOf } from '../../shared/energy/totals.ts';
import { effectiveTraces } from '../../shared/energy/trace.ts';
import type { Channel, Kind } from '../../shared/units/channels.ts';
import { homeIn, logOf, type Row } from '../unit/shared/energy/logs.ts';

/**
 * Open logs of two homes: five-minute energies from Australia (github.com/aguinane/nem-reader, MIT) and a British gas
 * register (github.com/opentrv/OpenTRV-Java, Apache-2.0), parsed here by plain splitting. The daily sums beside them
 * were made by two programs of other hands that agree to 0.0001 kWh.
 */
const data = path.resolve(import.meta.dirname, '../../../shared/data');
const lines = (name: string): string[][] =>
  readFileSync(path.join(data, name), 'utf8')
    .trim()
    .split(/\r?\n/)
    .slice(1)
    .map((line) => line.split(','));
const rowsOf = (table: readonly string[][], column: number, instant: (cell: string) => number): Row[] =>
  table.map((cells) => [instant(cells[0]), Number(cells[column])]);

function daysOf(
  rows: readonly Row[][],
  channels: readonly Channel[],
  kind: Kind,
  timeZone: string,
  dates: string[],
): Day[] {
  const columns = channels.map((channel, i) => ({ channel, kind, rows: rows[i] }));
  return deriveDays({ traces: effectiveTraces(logOf(1, ...columns)), dates, home: homeIn(timeZone) });
}

describe.skipIf(!existsSync(data))('figures of open logs', () => {
  const expected = (): string[][] => lines('au-solar-5min/expected-daily.csv');

  it.each([
    ['wide-iso.csv', 'energy'],
    ['registers.csv', 'register'],
  ] as const)('au-solar-5min/%s: 589.172 kWh out, 270.738 kWh in, each of 31 days', (name, kind) => {
    const table = lines(`au-solar-5min/${name}`);
    const dates = expected().map(([day]) => day);
    const rows = [1, 2].map((column) => rowsOf(table, column, Date.parse));
    // Brisbane keeps UTC+10 all the year.
    const days = daysOf(rows, ['export', 'import'], kind, 'Australia/Brisbane', dates);
    expected().forEach(([, , exported, imported], i) => {
      expect(days[i].exportKwh).toBeCloseTo(Number(exported), 3);
      expect(days[i].importKwh).toBeCloseTo(Number(imported), 3);
      expect(days[i].complete).toBe(true);
    });
    const totals = totalOf(days, null);
    expect(totals.exportKwh).toBeCloseTo(589.172, 3);
    expect(totals.importKwh).toBeCloseTo(270.738, 3);
    expect(totals.completeDays).toBe(31);
  });

  it('the export register goes over once, and that is told', () => {
    const table = lines('au-solar-5min/registers.csv');
    const rows = rowsOf(table, 1, Date.parse);
    const { told } = effectiveTraces(logOf(1, { channel: 'export', kind: 'register', rows }));
    expect(told.map(({ what, count }) => [what, count])).toEqual([['register rollover', 1]]);
  });

  it('uk-gas-15min: 1,694.82 kWh over 187 complete days, 9.00 kWh in the 23 hours of 2016-03-27', () => {
    const table = lines('uk-gas-15min/original.csv').map((cells) => cells.slice(2));
    const rows = rowsOf(table, 1, (cell) => Number(cell) * 1000);
    const asked = lines('uk-gas-15min/expected-daily.csv');
    const days = daysOf(
      [rows],
      ['gas'],
      'register',
      'Europe/London',
      asked.map(([day]) => day),
    );
    const known = asked
      .map((row, i) => ({ day: days[i], kwh: row[2], hours: Number(row[4]) }))
      .filter(({ kwh }) => kwh !== '');
    expect(known).toHaveLength(187);
    for (const { day, kwh, hours } of known) {
      expect(day.hours).toBe(hours);
      // The longest silence in the file is counted, so a day's sum is its midnight-to-midnight difference.
      expect((day.fuelMeasuredKwh ?? 0) + (day.spreadKwh.gas ?? 0)).toBeCloseTo(Number(kwh), 4);
    }
    const sum = known.reduce((total, { day }) => total + (day.fuelMeasuredKwh ?? 0) + (day.spreadKwh.gas ?? 0), 0);
    expect(sum).toBeCloseTo(1694.82, 2);
    expect(days.find(({ date }) => date === '2016-03-27')).toMatchObject({ hours: 23, fuelMeasuredKwh: 9 });
  });
});
