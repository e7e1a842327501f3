import { zoneOf } from '../../shared/time/zone.ts';

/** Today’s civil date in a zone. */
export function todayIn(timeZone: string, now = Date.now()): string {
  return zoneOf(timeZone).civilOf(now);
}
