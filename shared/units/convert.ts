import type { Unit } from './channels.ts';

/** `value × factor + offset` gives the base unit: W, kWh, m³, °C, or 0/1 for states. */
export interface ToBase {
  factor: number;
  offset: number;
}

/** Cubic metres in a cubic foot, exact by definition of the foot (0.3048 m). */
export const CUBIC_FOOT_M3 = 0.3048 ** 3;

const BASE: Record<Unit, ToBase> = {
  W: { factor: 1, offset: 0 },
  kW: { factor: 1000, offset: 0 },
  Wh: { factor: 0.001, offset: 0 },
  kWh: { factor: 1, offset: 0 },
  MWh: { factor: 1000, offset: 0 },
  MJ: { factor: 1 / 3.6, offset: 0 },
  m3: { factor: 1, offset: 0 },
  litre: { factor: 0.001, offset: 0 },
  ft3: { factor: CUBIC_FOOT_M3, offset: 0 },
  ft3x100: { factor: 100 * CUBIC_FOOT_M3, offset: 0 },
  C: { factor: 1, offset: 0 },
  F: { factor: 5 / 9, offset: -160 / 9 },
  state: { factor: 1, offset: 0 },
};

/** How a unit turns into its base unit. */
export function toBase(unit: Unit): ToBase {
  return BASE[unit];
}

/** Whether a unit measures fuel as a volume. */
export function isVolume(unit: Unit): boolean {
  return unit === 'm3' || unit === 'litre' || unit === 'ft3' || unit === 'ft3x100';
}

/** Volume correction to standard conditions (Gas (Calculation of Thermal Energy) Regulations 1996, SI 1996/439). */
const VOLUME_CORRECTION = 1.02264;

/**
 * Energy of a volume of mains gas: kWh = m³ × 1.02264 × CV / 3.6.
 *
 * @param m3 volume in m³ as the meter counts
 * @param calorificValue MJ/m³, gross
 * @returns kWh gross
 */
export function gasKwh(m3: number, calorificValue: number): number {
  return (m3 * VOLUME_CORRECTION * calorificValue) / 3.6;
}

/** The volume of mains gas that holds an energy, in m³: the inverse of {@link gasKwh}. */
export function gasM3(kwh: number, calorificValue: number): number {
  return (kwh * 3.6) / (VOLUME_CORRECTION * calorificValue);
}
