import type { Fuel } from '../api/property.ts';

/** kg CO2e per kWh (fuels gross CV; electricity at generation). */
interface Factors {
  gas: number;
  lpg: number;
  oil: number;
  electricity: number;
}

const SOURCE = 'DESNZ, Greenhouse gas reporting: conversion factors';

/** By country and reporting year. 2024 LPG and oil are from memory; the rest second-hand. */
const SETS: Record<string, Record<number, Factors>> = {
  GB: {
    2023: { gas: 0.18293, lpg: 0.2145, oil: 0.24677, electricity: 0.207074 },
    2024: { gas: 0.1829, lpg: 0.2145, oil: 0.24677, electricity: 0.20705 },
    2025: { gas: 0.18296, lpg: 0.2145, oil: 0.24677, electricity: 0.177 },
  },
};

export interface CarbonFactors {
  fuel: number;
  electricity: number;
  year: number;
  source: string;
}

/**
 * The factors for a fuel in a year: the reporting year's set, else the latest earlier one, else none.
 *
 * @returns null where no set is known for the country or the fuel
 */
export function carbonFactors(country: string | null, year: number, fuel: Fuel): CarbonFactors | null {
  const sets = country ? SETS[country] : undefined;
  if (!sets || fuel === 'none') return null;
  const years = Object.keys(sets).map(Number);
  const used = Math.max(...years.filter((y) => y <= year));
  if (!Number.isFinite(used)) return null;
  const set = sets[used];
  return { fuel: set[fuel], electricity: set.electricity, year: used, source: `${SOURCE} ${used}` };
}
