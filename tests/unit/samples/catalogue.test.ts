import { describe, expect, it } from 'vitest';
import { CATALOGUE, faultOf } from '../../../samples/make/catalogue.ts';
import { civilDate, dayNumber } from '../../../samples/make/civil.ts';
import { TYPICAL } from '../../../samples/make/home.ts';
import { measure, type MeasuredName } from '../../../samples/make/measure.ts';
import { simulate } from '../../../samples/make/simulate.ts';
import { CHECK_IDS } from '../../../shared/api/finding.ts';

describe('the catalogue of faults', () => {
  it('has every check', () => {
    expect(Object.keys(CATALOGUE).sort()).toEqual([...CHECK_IDS].sort());
  });

  const cases = Object.entries(CATALOGUE).flatMap(([check, list]) => list.map((one, i) => ({ check, i, one })));
  it.each(cases)('$check $i changes what is measured while it lasts, and nothing before', ({ one }) => {
    const home = one.change ? one.change(TYPICAL) : TYPICAL;
    const start = `2025-${String(one.month).padStart(2, '0')}-03`;
    const from = civilDate(dayNumber(start) + 2);
    const end = civilDate(dayNumber(start) + 9);
    const sound = measure(simulate(home, start, end));
    const broken = measure(simulate(home, start, end, [faultOf(one, from)]));
    const changed = new Set<string>(Object.keys(broken.resets));
    for (const [name, values] of Object.entries(broken.channels)) {
      const before = sound.channels[name as MeasuredName] ?? new Float64Array();
      expect(values.subarray(0, 2880)).toEqual(before.subarray(0, 2880));
      if (values.some((value, i) => !Object.is(value, before[i]))) changed.add(name);
    }
    expect(changed.size).toBeGreaterThan(0);
  });
});
