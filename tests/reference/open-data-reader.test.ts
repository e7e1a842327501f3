import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import type { ColumnPlan } from '../../shared/api/plan.ts';
import { zoneOf } from '../../shared/time/zone.ts';
import { applyAnswer } from '../../shared/columns/answer.ts';
import { inspectBytes } from '../../server/ingest/inspect.ts';
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

  /** The clock of the Australian files is UTC+10 all year; Queensland keeps that time. */
  const brisbane = { timeZone: 'Australia/Brisbane', latitude: -27.47, longitude: 153.03, country: 'Australia' };
  const london = { timeZone: 'Europe/London', latitude: null, longitude: null, country: null };
  const sums = (readings: [number, number][][]): number[] =>
    readings.map((column) => column.reduce((sum, [, value]) => sum + value, 0));

  it.each(['wide-iso.csv', 'semicolon.csv'])('au-solar-5min/%s is understood by itself', async (name) => {
    const { plan, questions } = await inspectBytes(file(`au-solar-5min/${name}`), name, brisbane);
    expect(questions).toEqual([]);
    if (!plan) throw new Error('no plan');
    expect(plan.time.stamp).toBe('start');
    expect(plan.columns.map(({ channel, kind, unit }) => [channel, kind, unit])).toEqual([
      ['export', 'energy', 'kWh'],
      ['import', 'energy', 'kWh'],
    ]);
    const own = await read(file(`au-solar-5min/${name}`), plan);
    expect(own.readings).toEqual((await read(file(`au-solar-5min/${name}`), PLANS[name])).readings);
  });

  it('au-solar-5min/registers.csv is understood by itself, its counter’s wrap too', async () => {
    const { plan, questions } = await inspectBytes(file('au-solar-5min/registers.csv'), 'registers.csv', brisbane);
    expect(questions).toEqual([]);
    if (!plan) throw new Error('no plan');
    expect(plan.columns.map(({ channel, kind, unit }) => [channel, kind, unit])).toEqual([
      ['export', 'register', 'kWh'],
      ['import', 'register', 'kWh'],
    ]);
    const { readings } = await read(file('au-solar-5min/registers.csv'), plan);
    // Naive: the sum of rises, the one fall taken as a wrap at the next power of ten.
    const risen = readings.map((column) => {
      let sum = 0;
      let wraps = 0;
      for (let i = 1; i < column.length; i++) {
        const step = column[i][1] - column[i - 1][1];
        if (step < 0) wraps++;
        sum += step < 0 ? step + 10 ** Math.ceil(Math.log10(column[i - 1][1])) : step;
      }
      return { sum, wraps };
    });
    expect(risen[0].sum).toBeCloseTo(589.172, 3);
    expect(risen[1].sum).toBeCloseTo(270.738, 3);
    expect(risen.map(({ wraps }) => wraps)).toEqual([1, 0]);
  });

  it('au-solar-5min/original.csv asks what its two sections are, and comes out once told', async () => {
    const bytes = file('au-solar-5min/original.csv');
    const found = await inspectBytes(bytes, 'original.csv', brisbane);
    expect(found.questions.map(({ about }) => about.split(':')[0])).toEqual(['"B1"', '"E1"']);
    // B1 is export and E1 import (data/README.md).
    const answers = ['Export in kWh.', 'Import in kWh.'];
    const plan = found.questions.reduce((soFar, question, i) => {
      const choice = question.choices.find(({ reason }) => reason === answers[i]);
      return applyAnswer(soFar, question.id, choice?.value ?? '');
    }, found.plan as ColumnPlan);
    const { readings, result } = await read(bytes, plan);
    expect(plan.columns.map(({ channel }) => channel)).toEqual(['export', 'import']);
    expect(sums(readings)[0]).toBeCloseTo(589.172, 3);
    expect(sums(readings)[1]).toBeCloseTo(270.738, 3);
    expect(readings).toEqual((await read(file('au-solar-5min/wide-iso.csv'), PLANS['wide-iso.csv'])).readings);
    expect(result.rows).toMatchObject({ accepted: 62, unchanged: 0 });
    // Only one of them told: nothing of the other may be taken for it.
    const half = await read(bytes, { ...plan, columns: plan.columns.slice(0, 1) });
    expect(sums(half.readings)[0]).toBeCloseTo(589.172, 3);
  });

  it('uk-gas-15min is understood by itself: the even clock of the two, and a counter of gas', async () => {
    const { plan, questions } = await inspectBytes(file('uk-gas-15min/original.csv'), 'original.csv', london);
    expect(questions).toEqual([]);
    expect(plan?.time).toMatchObject({ columns: ['device_timestamp'], format: 'epochSeconds' });
    expect(plan?.columns).toEqual([{ column: 'energy', channel: 'gas', kind: 'register', unit: 'kWh', sign: 1 }]);
  });
});
