import type { Property } from '../../shared/api/property.ts';
import { DAY_MS, civilDay } from '../../shared/time/civil.ts';
import { zoneOf } from '../../shared/time/zone.ts';
import type { TankChannel } from '../../shared/units/channels.ts';
import { readReadings } from '../api/days.ts';

const REACH_MS = 20 * 60_000;

/** The instant of a clock time on a civil date; the first where clocks show it twice, null where they leave it out. */
export function instantOf(timeZone: string, date: string, time: string): number | null {
  const [hour, minute] = time.split(':').map(Number);
  return zoneOf(timeZone).localToUtc(civilDay(date) * DAY_MS + (hour * 60 + minute) * 60_000)[0] ?? null;
}

/** The value of the point nearest to an instant, within twenty minutes of it; null if there is none. */
export function nearest(points: readonly (readonly [number, number | null])[], at: number): number | null {
  let best: number | null = null;
  let least = REACH_MS;
  for (const [instant, value] of points) {
    const away = Math.abs(instant - at);
    if (value !== null && away <= least) [best, least] = [value, away];
  }
  return best;
}

/** The temperatures of these sensors at the ready time of a day, as logged; what cannot be had is null. */
export async function readTankAt(
  property: Property,
  channels: readonly TankChannel[],
  date: string,
  signal: AbortSignal,
): Promise<Partial<Record<TankChannel, number | null>>> {
  const at = instantOf(property.timeZone, date, property.ready.time);
  if (at === null) return {};
  const read = async (channel: TankChannel) => {
    const span = { channel, from: at - REACH_MS, to: at + REACH_MS, points: 500 };
    const { points } = await readReadings(property.id, span, signal);
    return [channel, nearest(points, at)] as const;
  };
  return Object.fromEntries(await Promise.all(channels.map(read)));
}
