import type { DatedSystem, DatedTariff, Ready } from '../api/property.ts';

/** What the figures need to know of a property besides its readings. */
export interface Home {
  timeZone: string;
  country: string | null;
  latitude: number | null;
  longitude: number | null;
  ready: Ready;
  /** Oldest first; the first one also holds before its own date. */
  systems: DatedSystem[];
  /** Oldest first; the first one also holds before its own date. May be empty. */
  tariffs: DatedTariff[];
}
