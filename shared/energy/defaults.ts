import type { Default, Fuel, System } from '../api/property.ts';
import { boilerKind, defaultBoilerKind } from './boilers.ts';

/** A value taken where the record says nothing, with what it is and where it comes from. */
export interface DefaultValue<T extends number | string> {
  label: string;
  value: T;
  unit: string | null;
  source: string;
}

const PRACTICE = 'common practice, no source';

/** Every value that is assumed when a record is silent. The only place where such a number is written. */
export const DEFAULTS = {
  readyTime: entry('Ready time', '18:00', null, PRACTICE),
  readyTemperatureC: entry('Ready temperature', 50, '°C', PRACTICE),
  hygieneC: entry('Hygiene temperature', 60, '°C', 'HSE, “Hot and cold water systems”: store at 60 °C or above'),
  ambientC: entry(
    'Air around the cylinder',
    20,
    '°C',
    'Test condition of EN 12897 for standing loss; the 45 K behind it is from memory',
  ),
  heaterKw: entry('Immersion heater', 3, 'kW', PRACTICE),
  gasCalorificValue: entry(
    'Calorific value of gas',
    39.5,
    'MJ/m³',
    'Common practice, no source; Great Britain lies between 38 and 41, the bill states it',
  ),
  lpgCalorificValue: entry(
    'Calorific value of LPG',
    7.26,
    'kWh/litre',
    'DESNZ conversion factors 2025, worked out from the factors per litre and per kWh gross (second-hand)',
  ),
  oilCalorificValue: entry(
    'Calorific value of burning oil',
    10.29,
    'kWh/litre',
    'DESNZ conversion factors 2025, worked out from the factors per litre and per kWh gross (second-hand)',
  ),
  nameplateLoss: entry(
    'Taken off a nameplate efficiency for hot water',
    0.1,
    'share',
    'The step from winter to summer in SAP Table 4b, condensing regular (84 to 74 %)',
  ),
  storeFactor: entry(
    'Part of the diverted energy that becomes useful heat',
    0.9,
    'share',
    'SAP 10.2 Appendix G4: allowance for the hotter store (second-hand)',
  ),
  gasMeterCovers: entry('What the gas meter covers', 'house', null, 'The cautious choice: common practice, no source'),
  diversionIs: entry('Diverted energy is', 'metered', null, PRACTICE),
} as const;

function entry<const T extends number | string>(
  label: string,
  value: T,
  unit: string | null,
  source: string,
): DefaultValue<T> {
  return { label, value, unit, source };
}

function taken(path: string, { label, value, unit, source }: DefaultValue<number | string>): Default {
  return { path, label, value, unit, source };
}

const CALORIFIC: Record<Fuel, DefaultValue<number> | null> = {
  gas: DEFAULTS.gasCalorificValue,
  lpg: DEFAULTS.lpgCalorificValue,
  oil: DEFAULTS.oilCalorificValue,
  none: null,
};

/**
 * Every default that the figures take for this property, in the order of the record.
 *
 * @param ready what the property's record says of its ready time; absent parts are taken by default
 * @param system the system record in force
 */
export function defaultsTaken(ready: { time?: string; temperatureC?: number }, system: System): Default[] {
  const list: Default[] = [];
  if (ready.time === undefined) list.push(taken('ready.time', DEFAULTS.readyTime));
  if (ready.temperatureC === undefined) list.push(taken('ready.temperatureC', DEFAULTS.readyTemperatureC));
  if (!system.heaters?.length) list.push(taken('system.heaters', DEFAULTS.heaterKw));
  list.push(...boilerDefaults(system.boiler));
  if (system.gasMeterCovers === undefined && system.boiler.fuel === 'gas')
    list.push(taken('system.gasMeterCovers', DEFAULTS.gasMeterCovers));
  if (system.diversionIs === undefined) list.push(taken('system.diversionIs', DEFAULTS.diversionIs));
  if (system.hygieneC === undefined) list.push(taken('system.hygieneC', DEFAULTS.hygieneC));
  list.push(taken('ambient', DEFAULTS.ambientC), taken('storeFactor', DEFAULTS.storeFactor));
  return list;
}

function boilerDefaults(boiler: System['boiler']): Default[] {
  const list: Default[] = [];
  const assumed = defaultBoilerKind(boiler.fuel);
  if (!assumed) return list;
  const kind = (boiler.kind === undefined ? undefined : boilerKind(boiler.kind, boiler.fuel)) ?? assumed;
  if (boiler.kind === undefined)
    list.push({
      path: 'system.boiler.kind',
      label: `Boiler: ${kind.label}`,
      value: kind.id,
      unit: null,
      source: `Common practice, no source; its efficiencies: ${kind.source}`,
    });
  if (boiler.efficiency === undefined)
    list.push({
      path: 'system.boiler.efficiency',
      label: 'Efficiency for hot water (summer), gross',
      value: kind.summer,
      unit: 'share',
      source: kind.source,
    });
  else if (boiler.efficiencyIs !== 'hotWater') list.push(taken('system.boiler.efficiencyIs', DEFAULTS.nameplateLoss));
  const calorific = CALORIFIC[boiler.fuel];
  if (boiler.calorificValue === undefined && calorific) list.push(taken('system.boiler.calorificValue', calorific));
  return list;
}
