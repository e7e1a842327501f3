import { describe, expect, it } from 'vitest';
import type { System } from '../../../../shared/api/property.ts';
import { BOILER_KINDS, boilerKind, defaultBoilerKind } from '../../../../shared/energy/boilers.ts';
import { defaultsTaken } from '../../../../shared/energy/defaults.ts';

const system = (boiler: System['boiler'], more: Partial<System> = {}): System => ({
  cylinder: { volumeLitres: 210 },
  boiler,
  ...more,
});
const taken = (boiler: System['boiler'], more: Partial<System> = {}) =>
  Object.fromEntries(defaultsTaken({}, system(boiler, more)).map(({ path, value }) => [path, value]));

describe('the defaults taken', () => {
  it('when the boiler burns gas and nothing else is known, then it is a condensing regular one', () => {
    // SAP 2012 (9.92) Table 4b, code 102: 84 / 74 %; the calorific value is common practice, no source.
    expect(taken({ fuel: 'gas' })).toMatchObject({
      'system.boiler.kind': 'condensing-regular',
      'system.boiler.efficiency': 0.74,
      'system.boiler.calorificValue': 39.5,
    });
  });

  it('when the kind is recorded, then its efficiency is taken and the kind is no default', () => {
    const kind = taken({ fuel: 'gas', kind: 'back-boiler' });
    expect(kind['system.boiler.efficiency']).toBe(0.56);
    expect(kind).not.toHaveProperty('system.boiler.kind');
  });

  it('when an efficiency is recorded that may be a nameplate’s, then ten points come off; a hot-water one stands', () => {
    expect(taken({ fuel: 'gas', efficiency: 0.9 })).toMatchObject({ 'system.boiler.efficiencyIs': 0.1 });
    const stands = taken({ fuel: 'gas', efficiency: 0.8, efficiencyIs: 'hotWater' });
    expect(Object.keys(stands).filter((path) => path.includes('efficiency'))).toEqual([]);
  });

  it.each([
    // DESNZ conversion factors 2025: kWh per litre, gross, worked out.
    ['lpg', 7.26, 'condensing-regular'],
    ['oil', 10.29, 'oil-condensing'],
  ] as const)('when the boiler burns %s, then its own calorific value of %f is taken', (fuel, calorific, kind) => {
    expect(taken({ fuel })).toMatchObject({
      'system.boiler.calorificValue': calorific,
      'system.boiler.kind': kind,
    });
    expect(taken({ fuel })).not.toHaveProperty('system.gasMeterCovers');
  });

  it('when there is no fuel, then nothing of a boiler is assumed', () => {
    expect(Object.keys(taken({ fuel: 'none' })).filter((path) => path.startsWith('system.boiler'))).toEqual([]);
    expect(defaultBoilerKind('none')).toBeUndefined();
  });

  it('when everything that can be recorded is, then only what no record holds is left', () => {
    const full = system(
      { fuel: 'gas', kind: 'condensing-combi', efficiency: 0.8, efficiencyIs: 'hotWater', calorificValue: 39 },
      {
        heaters: [{ ratedKw: 3, position: 'lower', viaDiverter: true }],
        gasMeterCovers: 'house',
        diversionIs: 'metered',
        hygieneC: 60,
      },
    );
    const list = defaultsTaken({ time: '18:00', temperatureC: 50 }, full);
    expect(list.map(({ path }) => path)).toEqual(['ambient', 'storeFactor']);
  });

  it('when a default is shown, then it says where it comes from', () => {
    for (const { source, label } of defaultsTaken({}, system({ fuel: 'oil' }))) {
      expect(source).not.toBe('');
      expect(label).not.toBe('');
    }
  });
});

describe('the kinds of boiler', () => {
  it('when they are listed, then ids are unique and summer is never above winter', () => {
    expect(new Set(BOILER_KINDS.map((kind) => kind.id)).size).toBe(BOILER_KINDS.length);
    for (const { winter, summer } of BOILER_KINDS) expect(summer).toBeLessThan(winter);
  });

  it('when a kind does not burn the fuel, then it is not found', () => {
    expect(boilerKind('oil-condensing', 'gas')).toBeUndefined();
    expect(boilerKind('condensing-regular', 'lpg')?.summer).toBe(0.74);
  });
});
