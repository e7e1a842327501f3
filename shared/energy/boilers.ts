import type { Fuel } from '../api/property.ts';

/** A kind of boiler with its seasonal efficiencies, as shares of the gross calorific value. */
export interface BoilerKind {
  id: string;
  label: string;
  fuels: readonly Fuel[];
  winter: number;
  /** The one for heating the cylinder outside the heating season. */
  summer: number;
  source: string;
}

const table4b = (code: number) =>
  `SAP 2012 (9.92) Table 4b, code ${code}, second-hand; that SAP 10.2 has the same value is from memory`;

const GAS_AND_LPG = ['gas', 'lpg'] as const;
const GAS = ['gas'] as const;
const OIL = ['oil'] as const;

/** Seasonal efficiencies by kind after SAP Table 4b; the newest first within a fuel. */
export const BOILER_KINDS: readonly BoilerKind[] = [
  kind(102, 'condensing-regular', 'Condensing, regular, 1998 or later', GAS_AND_LPG, 84, 74),
  kind(104, 'condensing-combi', 'Condensing, combi, 1998 or later', GAS_AND_LPG, 84, 75),
  kind(101, 'non-condensing-regular', 'Not condensing, regular, 1998 or later', GAS_AND_LPG, 74, 64),
  kind(103, 'non-condensing-combi', 'Not condensing, combi, 1998 or later', GAS_AND_LPG, 74, 65),
  kind(106, 'condensing-pilot', 'Condensing, with a pilot light, 1998 or later', GAS_AND_LPG, 80, 70),
  kind(105, 'regular-pilot', 'Regular, with a pilot light, 1998 or later', GAS_AND_LPG, 70, 60),
  kind(109, 'back-boiler', 'Back boiler, 1998 or later', GAS_AND_LPG, 66, 56),
  kind(110, 'old-fan-low-water', 'Before 1998, fan flue, low water content', GAS, 73, 63),
  kind(111, 'old-fan-high-water', 'Before 1998, fan flue, high or unknown water content', GAS, 69, 59),
  kind(115, 'old-wall-hung', 'Before 1998, wall-hung, open or balanced flue', GAS, 66, 56),
  kind(116, 'old-floor-mounted', 'Before 1979, floor-mounted', GAS, 56, 46),
  kind(127, 'oil-condensing', 'Oil, condensing', OIL, 84, 72),
  kind(130, 'oil-condensing-combi', 'Oil, condensing combi', OIL, 82, 73),
  kind(126, 'oil-1998', 'Oil, 1998 or later', OIL, 80, 68),
  kind(125, 'oil-1985', 'Oil, 1985 to 1997', OIL, 71, 59),
  kind(124, 'oil-old', 'Oil, before 1985', OIL, 66, 54),
];

function kind(
  code: number,
  id: string,
  label: string,
  fuels: readonly Fuel[],
  winterPercent: number,
  summerPercent: number,
): BoilerKind {
  return { id, label, fuels, winter: winterPercent / 100, summer: summerPercent / 100, source: table4b(code) };
}

/** The kind with this id that burns this fuel, or undefined. */
export function boilerKind(id: string, fuel: Fuel): BoilerKind | undefined {
  return BOILER_KINDS.find((k) => k.id === id && k.fuels.includes(fuel));
}

/** The kind assumed where the record names none: condensing regular, condensing for oil, none without a fuel. */
export function defaultBoilerKind(fuel: Fuel): BoilerKind | undefined {
  return BOILER_KINDS.find((k) => k.fuels.includes(fuel));
}
