/**
 * Seeded chance. Every draw is keyed by a seed and by what it is for (a day, a year, a purpose), so that a day of a
 * home comes out the same whenever, and from wherever, the simulation starts.
 */
export interface Chance {
  /** Uniform in [0, 1). */
  next(): number;
  /** Uniform in [low, high). */
  between(low: number, high: number): number;
  /** Normal with mean 0 and deviation 1 (Box and Muller 1958). */
  normal(): number;
  /** Exponential with the given mean. */
  exponential(mean: number): number;
}

/** Purposes, so that two uses on one day never share draws. */
export const PURPOSE = { sky: 1, skyDay: 2, load: 3, draws: 4, away: 5, weather: 6, meters: 7, volts: 8 } as const;

/** A 32-bit hash of small integers (multiply and fold; finalising constants as published for MurmurHash3). */
export function hash(...parts: number[]): number {
  let h = 0x9e3779b9;
  for (const part of parts) {
    h = Math.imul(h ^ (part | 0), 0x85ebca6b);
    h ^= h >>> 13;
    h = Math.imul(h, 0xc2b2ae35);
    h ^= h >>> 16;
  }
  return h >>> 0;
}

/** A stream of chance for one purpose: Marsaglia's xorshift with four words (2003, shifts 11, 8, 19). */
export function chance(...key: number[]): Chance {
  let x = hash(...key, 1);
  let y = hash(...key, 2);
  let z = hash(...key, 3);
  let w = hash(...key, 4) | 1;
  const next = (): number => {
    const t = x ^ (x << 11);
    x = y;
    y = z;
    z = w;
    w = w ^ (w >>> 19) ^ t ^ (t >>> 8);
    return (w >>> 0) / 4294967296;
  };
  return {
    next,
    between: (low, high) => low + (high - low) * next(),
    normal: () => Math.sqrt(-2 * Math.log(1 - next())) * Math.cos(2 * Math.PI * next()),
    exponential: (mean) => -mean * Math.log(1 - next()),
  };
}

/** Normal chance that runs on from day to day: a weighted sum of independent draws of this and the `memory` days before. */
export function persistent(seed: number, purpose: number, day: number, carry: number, memory = 8): number {
  let sum = 0;
  let squares = 0;
  let weight = 1;
  for (let back = 0; back <= memory; back++) {
    sum += weight * chance(seed, purpose, day - back).normal();
    squares += weight * weight;
    weight *= carry;
  }
  return sum / Math.sqrt(squares);
}
