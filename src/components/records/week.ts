import type { Tariff } from '../../../shared/api/property.ts';

export type DayOfWeek = NonNullable<Tariff['windows']>[number]['days'][number];
/** In the order of the week, with the names the screen shows. */
export const WEEK: Record<DayOfWeek, string> = {
  mon: 'Mon',
  tue: 'Tue',
  wed: 'Wed',
  thu: 'Thu',
  fri: 'Fri',
  sat: 'Sat',
  sun: 'Sun',
};
export const DAYS = Object.keys(WEEK) as DayOfWeek[];
