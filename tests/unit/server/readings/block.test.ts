import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { channelsOf, decodeLayer, encodeLayer, hashOf, patchIntervals } from '../../../../server/readings/block.ts';
import type { Layer, LayerColumn } from '../../../../shared/energy/layer.ts';
import { CHANNELS, KINDS, UNITS } from '../../../../shared/units/channels.ts';

const number = (min: number, max: number) => fc.integer({ min, max });
/** Whole numbers of every size up to 2^53, small ones mostly. */
const whole = fc.oneof(
  { weight: 5, arbitrary: number(-300, 300) },
  { weight: 2, arbitrary: number(-(2 ** 31), 2 ** 31) },
  { weight: 1, arbitrary: fc.maxSafeInteger() },
);
const plain = fc.double({ noNaN: true });

const instantsOf = (rows: number): fc.Arbitrary<Float64Array> => {
  const from = fc.oneof(number(0, 4e12), number(-1e12, 4e12));
  const regular = fc.tuple(from, number(1, 90_000_000)).map(
    ([t, step]) =>
      (i: number) =>
        t + i * step,
  );
  const uneven = fc.tuple(from, fc.array(number(1, 40_000_000), { minLength: rows, maxLength: rows })).map(
    ([t, steps]) =>
      (i: number) =>
        steps.slice(0, i).reduce((sum, step) => sum + step, t),
  );
  const fractions = fc.tuple(from, number(1, 100_000)).map(
    ([t, step]) =>
      (i: number) =>
        t + i * step * 0.1,
  );
  return fc.oneof(regular, uneven, fractions).map((at) => Float64Array.from({ length: rows }, (_, i) => at(i)));
};

const columnOf = (rows: number): fc.Arbitrary<LayerColumn> =>
  fc
    .record({
      channel: fc.constantFrom(...CHANNELS),
      kind: fc.constantFrom(...KINDS),
      unit: fc.constantFrom(...UNITS),
      sign: fc.constantFrom(1 as const, -1 as const),
      factor: fc.double({ min: 1e-6, max: 1e6, noNaN: true }),
      stamp: fc.constantFrom('start' as const, 'end' as const, 'instant' as const),
      hold: fc.constantFrom('toNext' as const, null),
      sleeps: fc.constantFrom('dark' as const, null),
      intervalSeconds: fc.double({ min: 0, max: 1e7, noNaN: true }),
      scale: fc.option(number(0, 12)),
      missing: fc.constantFrom(0, 0, 0.3, 1),
    })
    .chain(({ missing, ...meaning }) =>
      fc
        .array(
          fc.tuple(
            meaning.scale === null ? plain : whole,
            fc.double({ min: 0, max: 1, maxExcluded: true, noNaN: true }),
          ),
          { minLength: rows, maxLength: rows },
        )
        .map((cells) => ({
          ...meaning,
          // A negative zero is stored as zero: no meter means anything by it.
          values: Float64Array.from(cells, ([value, chance]) => (chance < missing ? NaN : value === 0 ? 0 : value)),
        })),
    );

const layer: fc.Arbitrary<Layer> = number(0, 60).chain((rows) =>
  fc.record({
    utcDay: number(-1000, 60_000),
    instants: instantsOf(rows),
    columns: fc.array(columnOf(rows), { maxLength: 5 }),
  }),
);

describe('blocks of readings', () => {
  it('when a layer is encoded and decoded, then it is the same', () => {
    fc.assert(
      fc.property(layer, (given) => {
        expect(decodeLayer(encodeLayer(given), given.utcDay)).toEqual(given);
      }),
      { numRuns: 2000 },
    );
  });

  it('when only some channels are asked for, then the others are left out and nothing else changes', () => {
    fc.assert(
      fc.property(layer, fc.uniqueArray(fc.constantFrom(...CHANNELS)), (given, wanted) => {
        const only = new Set(wanted);
        const block = encodeLayer(given);
        expect(channelsOf(block)).toEqual(given.columns.map(({ channel }) => channel));
        expect(decodeLayer(block, given.utcDay, only)).toEqual({
          ...given,
          columns: given.columns.filter(({ channel }) => only.has(channel)),
        });
      }),
      { numRuns: 300 },
    );
  });

  it('when intervals are patched, then the block is the one that would have been made with them', () => {
    fc.assert(
      fc.property(layer, fc.double({ min: 0, max: 1e7, noNaN: true }), (given, seconds) => {
        const block = encodeLayer(given);
        patchIntervals(
          block,
          given.columns.map(() => seconds),
        );
        const meant = given.columns.map((column) => ({ ...column, intervalSeconds: seconds }));
        expect(block).toEqual(encodeLayer({ ...given, columns: meant }));
      }),
      { numRuns: 300 },
    );
  });

  it('when any part of a meaning differs, then the hash differs', () => {
    const base: LayerColumn = {
      channel: 'export',
      kind: 'power',
      unit: 'W',
      sign: 1,
      factor: 1,
      stamp: 'start',
      hold: null,
      sleeps: null,
      intervalSeconds: 60,
      scale: 1,
      values: Float64Array.of(1, 2, NaN),
    };
    const others: Partial<LayerColumn>[] = [
      { channel: 'import' },
      { kind: 'energy' },
      { unit: 'kW' },
      { sign: -1 },
      { factor: 2 },
      { stamp: 'end' },
      { stamp: 'instant' },
      { hold: 'toNext' },
      { sleeps: 'dark' },
      { intervalSeconds: 61 },
      { scale: 2 },
      { scale: null },
      { values: Float64Array.of(1, 2, 3) },
    ];
    const hash = (column: LayerColumn, first = 0) =>
      hashOf(encodeLayer({ utcDay: 0, instants: Float64Array.of(first, 60_000, 120_000), columns: [column] })).toString(
        'hex',
      );
    const all = [hash(base), hash(base, 1), ...others.map((other) => hash({ ...base, ...other }))];
    expect(new Set(all).size).toBe(others.length + 2);
    expect(hash({ ...base })).toBe(all[0]);
  });

  it('when a block is of another version or cut short, then it is refused', () => {
    const block = encodeLayer({ utcDay: 0, instants: Float64Array.of(1, 2), columns: [] });
    expect(() => decodeLayer(block.subarray(0, 5), 0)).toThrow(RangeError);
    expect(() => decodeLayer(Uint8Array.of(...block, 0), 0)).toThrow('damaged');
    block[0] = 9;
    expect(() => decodeLayer(block, 0)).toThrow('version 9');
  });
});
