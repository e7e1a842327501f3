import { TANK_CHANNELS, type TankChannel } from '../units/channels.ts';
import type { Tank } from '../api/day.ts';
import type { System } from '../api/property.ts';
import type { Cursor } from './sums.ts';
import { valueAt } from './sums.ts';

const USUAL_HEIGHT: Record<TankChannel, number> = { tankTop: 0.85, tankMiddle: 0.5, tankBottom: 0.15 };

/** The sensor that speaks for the tank: the top one, else the highest that was logged. */
export function tankSensor(logged: (channel: TankChannel) => boolean, system: System): TankChannel | null {
  const there = TANK_CHANNELS.filter(logged);
  if (there.includes('tankTop')) return 'tankTop';
  return there.sort((a, b) => sensorHeight(b, system) - sensorHeight(a, system))[0] ?? null;
}

/** Height of a sensor as a share, as recorded, else where such a sensor usually sits. */
export function sensorHeight(channel: TankChannel, system: System): number {
  return system.cylinder.sensors?.find((s) => s.channel === channel)?.height ?? USUAL_HEIGHT[channel];
}

const HOUR_MS = 3_600_000;

export interface TankTerms {
  readyAt: number;
  readyC: number;
  hygieneC: number;
}

/**
 * A day's tank figures from one sensor: least, greatest, at the ready time (interpolated between readings that are near
 * enough, else null), hours at or above the hygiene temperature, and the longest unbroken spell of them.
 *
 * @param cursor on the sensor's trace in °C
 * @returns null where the sensor has nothing on that day
 */
export function tankOfDay(
  cursor: Cursor,
  sensor: TankChannel,
  from: number,
  to: number,
  { readyAt, readyC, hygieneC }: TankTerms,
): Tank | null {
  const { t0, t1, v0, v1, length } = cursor.trace;
  let min = Infinity;
  let max = -Infinity;
  let hot = 0;
  let spell = 0;
  let longest = 0;
  let last = NaN;
  for (let i = cursor.seek(from); i < length && t0[i] < to; i++) {
    const a = Math.max(t0[i], from);
    const b = Math.min(t1[i], to);
    const slope = (v1[i] - v0[i]) / (t1[i] - t0[i]);
    const va = a === t0[i] ? v0[i] : v0[i] + slope * (a - t0[i]);
    const vb = b === t1[i] ? v1[i] : v0[i] + slope * (b - t0[i]);
    min = Math.min(min, va, vb);
    max = Math.max(max, va, vb);
    if (a !== last) spell = 0;
    last = b;
    if (va >= hygieneC && vb >= hygieneC) {
      hot += b - a;
      spell += b - a;
    } else if (va >= hygieneC || vb >= hygieneC) {
      const part = ((Math.max(va, vb) - hygieneC) / Math.abs(vb - va)) * (b - a);
      hot += part;
      longest = Math.max(longest, va >= hygieneC ? spell + part : 0);
      spell = vb >= hygieneC ? part : 0;
    } else spell = 0;
    longest = Math.max(longest, spell);
  }
  if (max === -Infinity) return null;
  const atReady = valueAt(cursor, readyAt);
  return {
    sensor,
    minC: min,
    maxC: max,
    atReadyC: atReady,
    readyMet: atReady === null ? null : atReady >= readyC,
    hygieneHours: hot / HOUR_MS,
    longestHygieneHours: longest / HOUR_MS,
  };
}
