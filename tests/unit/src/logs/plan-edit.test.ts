import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { ColumnPlan, type Sample } from '../../../../shared/api/plan.ts';
import { ALLOWED, CHANNELS, KINDS, QUANTITY } from '../../../../shared/units/channels.ts';
import {
  fileColumns,
  planIssues,
  setChannel,
  setColumn,
  setKind,
  startColumn,
  toWords,
} from '../../../../src/components/logs/plan-edit.ts';

const plan: ColumnPlan = {
  encoding: 'utf-8',
  delimiter: ',',
  decimal: '.',
  headerLine: 1,
  time: { columns: ['time'], format: 'iso', zone: 'UTC', stamp: 'end' },
  columns: [
    { column: 'export W', channel: 'export', kind: 'power', unit: 'W', sign: 1 },
    { column: 4, channel: 'tankTop', kind: 'level', unit: 'C', sign: 1 },
  ],
};
const sample: Sample = {
  header: ['time', 'export W', 'temp', 'temp'],
  lines: [
    { line: 2, cells: ['2026-01-01T00:00:00Z', '5', '', '51.2'] },
    { line: 3, cells: ['2026-01-01T00:01:00Z', '', '', '51.3'] },
  ],
  readings: [],
  rows: 2,
  from: null,
  to: null,
  columns: [{ column: 'export W', number: 2, channel: 'export', confidence: 0.9, reason: 'The heading says so.' }],
};

describe('fileColumns', () => {
  it('sets every column of the file beside what the plan says of it', () => {
    const columns = fileColumns(plan, sample);
    expect(columns.map(({ name, ref, isTime, index }) => ({ name, ref, isTime, index }))).toEqual([
      { name: 'time', ref: 'time', isTime: true, index: null },
      { name: 'export W', ref: 'export W', isTime: false, index: 0 },
      { name: 'temp', ref: 3, isTime: false, index: null },
      { name: 'temp', ref: 4, isTime: false, index: 1 },
    ]);
    expect(columns[1]).toMatchObject({ confidence: 0.9, reason: 'The heading says so.', examples: ['5'] });
  });

  it('takes a doubled heading named in the plan as its first column', () => {
    const named = { ...plan, columns: [{ ...plan.columns[1], column: 'temp' }] };
    expect(fileColumns(named, sample).map((column) => column.index)).toEqual([null, null, 0, null]);
  });

  it('loses no planned column that the sample does not show', () => {
    const columns = fileColumns({ ...plan, columns: [{ ...plan.columns[0], column: 'elsewhere' }] }, sample);
    expect(columns.at(-1)).toMatchObject({ name: 'elsewhere', index: 0 });
  });

  it('shows the columns before anything was understood', () => {
    expect(fileColumns(null, sample)).toHaveLength(4);
  });
});

describe('changes of a plan', () => {
  it('stay within what the API’s schema allows, whatever the person picks', () => {
    fc.assert(
      fc.property(
        fc.array(fc.record({ at: fc.nat(3), channel: fc.constantFrom(...CHANNELS), kind: fc.constantFrom(...KINDS) }), {
          minLength: 1,
          maxLength: 12,
        }),
        (picks) => {
          let current = plan;
          for (const pick of picks) {
            current = setChannel(current, fileColumns(current, sample)[pick.at], pick.channel);
            const index = fileColumns(current, sample)[pick.at].index;
            if (index === null) continue;
            if (ALLOWED[QUANTITY[pick.channel]].kinds.includes(pick.kind)) current = setKind(current, index, pick.kind);
            expect(current.columns[index].channel).toBe(pick.channel);
            expect(ColumnPlan.safeParse(current).error?.issues ?? []).toEqual([]);
          }
        },
      ),
    );
  });

  it('keep the other columns as they were', () => {
    const columns = fileColumns(plan, sample);
    const added = setChannel(plan, columns[2], 'tankBottom');
    expect(added.columns).toEqual([
      ...plan.columns,
      { column: 3, channel: 'tankBottom', kind: 'level', unit: 'C', sign: 1 },
    ]);
    expect(setChannel(plan, columns[1], null).columns).toEqual([plan.columns[1]]);
    expect(setColumn(plan, 0, { factor: 2 }).columns[0]).toEqual({ ...plan.columns[0], factor: 2 });
    expect(setColumn(setColumn(plan, 0, { factor: 2 }), 0, { factor: undefined })).toEqual(plan);
  });

  it.each([
    ['Export (kWh)', 'export', 'energy', 'kWh'],
    ['p_div_w', 'diversion', 'power', 'W'],
    ['Gas m³', 'gas', 'energy', 'm3'],
    ['top °F', 'tankTop', 'level', 'F'],
    ['relay', 'relay', 'state', 'state'],
    ['kWh', 'tankTop', 'level', 'C'],
  ] as const)('start a column headed %s from its unit', (name, channel, kind, unit) => {
    expect(startColumn(name, name, channel)).toMatchObject({ kind, unit });
  });
});

describe('planIssues', () => {
  it('asks for a column, and for both words of a state', () => {
    expect(planIssues({ ...plan, columns: [] }).map((issue) => issue.path)).toEqual(['columns']);
    const relay = { column: 'r', channel: 'relay', kind: 'state', unit: 'state', sign: 1, on: ['closed'] } as const;
    expect(planIssues({ ...plan, columns: [{ ...relay, on: ['closed'] }] }).map((issue) => issue.path)).toEqual([
      'columns.0.off',
    ]);
    expect(planIssues({ ...plan, time: { ...plan.time, zone: 'Middle Earth' } }).map((issue) => issue.path)).toEqual([
      'time.zone',
    ]);
    expect(planIssues({ ...plan, headerLine: NaN, columns: [{ ...plan.columns[0], factor: NaN }] })).toHaveLength(2);
    expect(planIssues(plan)).toEqual([]);
  });
});

it('toWords splits at commas and semicolons', () => {
  expect(toWords(' n/a, -- ;x,,')).toEqual(['n/a', '--', 'x']);
});
