import type { Fuel, NewProperty } from '../../../shared/api/property.ts';
import { FieldReader, type Issue } from './issues.ts';
import { parseNumber } from './parse.ts';
import { parseCountry, parseZone, placeLabel } from './place-form.ts';
import { RULES, systemLabel } from './system-form.ts';

export interface NewForm {
  name: string;
  timeZone: string;
  country: string;
  volumeLitres: string;
  fuel: Fuel;
  kind: string;
}

/** The screen's name for a path of the new property. */
export function newLabel(path: string): string {
  return path.startsWith('system.') ? systemLabel(path.slice('system.'.length)) : placeLabel(path);
}

/** The property to add; the record holds from its first day, so no date is asked. */
export function toNewProperty(form: NewForm): { property: NewProperty; issues: Issue[] } {
  const read = new FieldReader();
  const name = form.name.trim();
  if (name === '') read.say('name', newLabel('name'), 'This is needed.');
  if (name.length > 120) read.say('name', newLabel('name'), 'Use 120 characters at most.');
  const timeZone = read.required('timeZone', newLabel('timeZone'), form.timeZone, parseZone, 'UTC');
  const country = read.optional('country', newLabel('country'), form.country, parseCountry);
  const path = 'system.cylinder.volumeLitres';
  const volumeLitres = read.required(
    path,
    newLabel(path),
    form.volumeLitres,
    (text) => parseNumber(text, RULES.volumeLitres),
    RULES.volumeLitres.min,
  );
  const kind = form.fuel !== 'none' && form.kind ? { kind: form.kind } : {};
  return {
    property: {
      name,
      timeZone,
      ...(country !== undefined && { country }),
      system: { cylinder: { volumeLitres }, boiler: { fuel: form.fuel, ...kind } },
    },
    issues: read.issues,
  };
}

const ZONE_COUNTRIES: Record<string, string> = {
  'Europe/London': 'GB',
  'Europe/Belfast': 'GB',
  'Europe/Dublin': 'IE',
  'Europe/Berlin': 'DE',
  'Europe/Paris': 'FR',
  'Europe/Madrid': 'ES',
  'Europe/Rome': 'IT',
  'Europe/Vienna': 'AT',
  'Europe/Zurich': 'CH',
  'Europe/Amsterdam': 'NL',
  'Europe/Brussels': 'BE',
  'Europe/Lisbon': 'PT',
  'Pacific/Auckland': 'NZ',
};

/**
 * A guess at the country, to be seen and corrected: by the zone where it lies in one country, else by the language's
 * region.
 * @returns two letters, or empty where nothing is known
 */
export function countryOfBrowser(timeZone: string, language: string): string {
  if (timeZone.startsWith('Australia/')) return 'AU';
  return ZONE_COUNTRIES[timeZone] ?? /^[a-z]{2,3}(?:-[A-Za-z]{4})?-([A-Z]{2})\b/.exec(language)?.[1] ?? '';
}
