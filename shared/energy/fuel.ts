import type { System } from '../api/property.ts';
import { boilerKind, defaultBoilerKind } from './boilers.ts';
import { DEFAULTS } from './defaults.ts';

export interface HotWaterEfficiency {
  value: number;
  /** To the winter value of the same boiler, lowest first. */
  range: [number, number];
  rests: 'measured' | 'assumed';
  source: string;
}

/**
 * The boiler's hot-water (summer) efficiency, gross, as a share: recorded as such; else a recorded nameplate or seasonal
 * value less the winter-to-summer step of SAP Table 4b; else Table 4b by kind.
 *
 * @returns null for a home without a boiler
 */
export function hotWaterEfficiency(boiler: System['boiler']): HotWaterEfficiency | null {
  if (boiler.fuel === 'none') return null;
  const kind =
    (boiler.kind === undefined ? undefined : boilerKind(boiler.kind, boiler.fuel)) ?? defaultBoilerKind(boiler.fuel);
  if (!kind) return null;
  if (boiler.efficiency !== undefined) {
    const recorded = boiler.efficiency;
    const step = DEFAULTS.nameplateLoss.value;
    if (boiler.efficiencyIs === 'hotWater')
      return { value: recorded, range: [recorded, recorded + step], rests: 'measured', source: 'as recorded' };
    return {
      value: recorded - step,
      range: [recorded - step, recorded],
      rests: 'assumed',
      source: `recorded ${recorded}, less ${step}: ${DEFAULTS.nameplateLoss.source}`,
    };
  }
  return { value: kind.summer, range: [kind.summer, kind.winter], rests: 'assumed', source: kind.source };
}

/** Calorific value: MJ/m³ for gas, kWh/litre for LPG and oil. */
export function calorificValue(boiler: System['boiler']): number | null {
  if (boiler.calorificValue !== undefined) return boiler.calorificValue;
  switch (boiler.fuel) {
    case 'gas':
      return DEFAULTS.gasCalorificValue.value;
    case 'lpg':
      return DEFAULTS.lpgCalorificValue.value;
    case 'oil':
      return DEFAULTS.oilCalorificValue.value;
    case 'none':
      return null;
  }
}
