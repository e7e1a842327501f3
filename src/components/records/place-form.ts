import type { Property, PropertyPatch } from '../../../shared/api/property.ts';
import { isZone } from '../../../shared/time/zone.ts';
import { FieldReader, type Issue } from './issues.ts';
import { parseClock, parseNumber, toText, type NumberRule, type Parsed } from './parse.ts';

export interface PlaceForm {
  name: string;
  timeZone: string;
  country: string;
  latitude: string;
  longitude: string;
  readyTime: string;
  readyTemperature: string;
}

export const PLACE_RULES = {
  latitude: { min: -90, max: 90, unit: '°' },
  longitude: { min: -180, max: 180, unit: '°' },
  readyTemperature: { min: 30, max: 75, unit: '°C', units: ['c', '°', 'degrees'] },
} satisfies Record<string, NumberRule>;

const LABELS: Record<string, string> = {
  name: 'Name',
  timeZone: 'Time zone',
  country: 'Country',
  latitude: 'Latitude',
  longitude: 'Longitude',
  'ready.time': 'Ready time',
  'ready.temperatureC': 'Ready temperature',
};

/** The screen's name for a path of the property. */
export function placeLabel(path: string): string {
  return LABELS[path] ?? path;
}

/** The form that shows a property. What is only a default shows as empty, so that saving does not write it down. */
export function fromProperty(property: Property): PlaceForm {
  const assumed = new Set(property.defaults.map((one) => one.path));
  return {
    name: property.name,
    timeZone: property.timeZone,
    country: property.country ?? '',
    latitude: toText(property.latitude),
    longitude: toText(property.longitude),
    readyTime: assumed.has('ready.time') ? '' : property.ready.time,
    readyTemperature: assumed.has('ready.temperatureC') ? '' : toText(property.ready.temperatureC),
  };
}

/** A time zone's IANA name, blanks for underscores forgiven. */
export function parseZone(text: string): Parsed<string> {
  const name = text.trim().replace(/\s+/g, '_');
  return isZone(name) && (name === 'UTC' || name.includes('/'))
    ? { ok: true, value: name }
    : { ok: false, message: `“${text.trim()}” is not a time zone: write for example Europe/London.` };
}

/** A country's two letters. */
export function parseCountry(text: string): Parsed<string> {
  const code = text.trim().toUpperCase();
  if (code === 'UK') return { ok: true, value: 'GB' };
  return /^[A-Z]{2}$/.test(code)
    ? { ok: true, value: code }
    : { ok: false, message: 'Write the code of two letters, such as GB or IE.' };
}

/**
 * The change that the form asks for. An emptied field goes back to unknown, an emptied ready time to its default.
 * @returns the patch, and what is wrong; with any issue it is not to be sent
 */
export function toPatch(form: PlaceForm): { patch: PropertyPatch; issues: Issue[] } {
  const read = new FieldReader();
  const name = form.name.trim();
  if (name === '') read.say('name', placeLabel('name'), 'This is needed.');
  if (name.length > 120) read.say('name', placeLabel('name'), 'Use 120 characters at most.');
  const number = (path: string, text: string, rule: NumberRule): number | null =>
    read.optional(path, placeLabel(path), text, (typed) => parseNumber(typed, rule)) ?? null;
  const patch: PropertyPatch = {
    name,
    timeZone: read.required('timeZone', placeLabel('timeZone'), form.timeZone, parseZone, 'UTC'),
    country: read.optional('country', placeLabel('country'), form.country, parseCountry) ?? null,
    latitude: number('latitude', form.latitude, PLACE_RULES.latitude),
    longitude: number('longitude', form.longitude, PLACE_RULES.longitude),
    ready: {
      time: read.optional('ready.time', placeLabel('ready.time'), form.readyTime, (text) => parseClock(text)) ?? null,
      temperatureC: number('ready.temperatureC', form.readyTemperature, PLACE_RULES.readyTemperature),
    },
  };
  return { patch, issues: read.issues };
}
