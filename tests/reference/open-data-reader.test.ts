import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import type { ColumnPlan } from '../../shared/api/plan.ts';
import { zoneOf } from '../../shared/time/zone.ts';
import { read } from '../unit/server/ingest/reading.ts';

/**
 * A home in Australia, five-minute energies, March 2023 (github.com/aguinane/nem-reader, MIT), and a British gas
 * register, 2016 (github.com/opentrv/OpenTRV-Java, Apache-2.0). The daily sums beside them were made by two programs
 * of other hands that agree to 0.0001 kWh.
 */
const data = path.resolve(import.meta.dirname, '../../../shared/data');
const file = (name: string): Buffer => readFileSync(path.join(data, name));
const table = (name: string): string[][] =>
  file(name)
    .toString()
    .trim()
    .split('\n')
    .slice(1)
    .map((line) => line.split(','));

const energy = (column: string, channel: 'export' | 'import'): ColumnPlan['columns'][number] => ({
  column,
  channel,
  kind: 'energy',
  unit: 'kWh',
  sign: 1,
});

const PLANS: Record<string, ColumnPlan> = {
  'wide-iso.csv': {
    encoding: 'utf-8',
    delimiter: ',',
    decimal: '.',
    headerLine: 1,
    time: { columns: ['timestamp'], format: 'iso', zone: '+10:00', stamp: 'start' },
    columns: [energy('export_kwh', 'export'), energy('import_kwh', 'import')],
  },
  'semicolon.csv': {
    encoding: 'utf-8',
    delimiter: ';',
    decimal: ',',
    headerLine: 4,
    time: { columns: ['Datum', 'Uhrzeit'], format: 'dd.MM.yyyy HH:mm', zone: '+10:00', stamp: 'start' },
    columns: [energy('Einspeisung (kWh)', 'export'), energy('Bezug (kWh)', 'import')],
  },
};

describe.skipIf(!existsSync(data))('open data', () => {
  it.each(Object.keys(PLANS))('au-solar-5min/%s comes to the published daily sums', async (name) => {
    const { readings, result } = await read(file(`au-solar-5min/${name}`), PLANS[name]);
    const zone = zoneOf('+10:00');
    for (const [day, , exported, imported] of table('au-solar-5min/expected-daily.csv')) {
      const sums = readings.map((column) =>
        column.filter(([t]) => zone.civilOf(t) === day).reduce((sum, [, value]) => sum + value, 0),
      );
      expect(sums[0]).toBeCloseTo(Number(exported), 4);
      expect(sums[1]).toBeCloseTo(Number(imported), 4);
    }
    const totals = readings.map((column) => column.reduce((sum, [, value]) => sum + value, 0));
    expect(totals[0]).toBeCloseTo(589.172, 3);
    expect(totals[1]).toBeCloseTo(270.738, 3);
    expect(result.rows).toEqual({ read: 8928, accepted: 8928, rejected: 0, unchanged: 0 });
    expect(result.intervals).toEqual([300, 300]);
    expect(result.problems).toEqual([]);
  });

  it('uk-gas-15min comes to the published days by its midnight readings', async () => {
    const { readings } = await read(file('uk-gas-15min/original.csv'), {
      encoding: 'utf-8',
      delimiter: ',',
      decimal: '.',
      headerLine: 1,
      time: { columns: ['device_timestamp'], format: 'epochSeconds', zone: 'UTC', stamp: 'instant' },
      columns: [{ column: 'energy', channel: 'gas', kind: 'register', unit: 'kWh', sign: 1 }],
    });
    const at = new Map(readings[0]);
    const zone = zoneOf('Europe/London');
    let total = 0;
    let days = 0;
    for (const [day, , kwh, , hours] of table('uk-gas-15min/expected-daily.csv')) {
      const bounds = zone.dayBounds(day);
      expect(bounds.hours).toBe(Number(hours));
      if (kwh === '') continue;
      const used = (at.get(bounds.end) ?? NaN) - (at.get(bounds.start) ?? NaN);
      expect(used).toBeCloseTo(Number(kwh), 6);
      total += used;
      days++;
    }
    expect(days).toBe(187);
    expect(total).toBeCloseTo(1694.82, 6);
  });
});
