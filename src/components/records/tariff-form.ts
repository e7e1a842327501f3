import type { DatedTariff } from '../../../shared/api/property.ts';
import { FieldReader, type Issue } from './issues.ts';
import { parseClock, parseDate, parsePrice, toText } from './parse.ts';
import { DAYS, type DayOfWeek } from './week.ts';

export interface WindowForm {
  days: DayOfWeek[];
  start: string;
  end: string;
  clock: 'civil' | 'standard';
  importPerKwh: string;
  exportPerKwh: string;
}

/** A tariff as text, so that what was typed stays as typed until it is sent. */
export interface TariffForm {
  from: string;
  currency: string;
  fuelPerKwh: string;
  importPerKwh: string;
  exportPerKwh: string;
  exportPayment: 'metered' | 'deemed' | 'none';
  windows: WindowForm[];
}

export function emptyTariffForm(from: string, currency: string): TariffForm {
  return {
    from,
    currency,
    fuelPerKwh: '',
    importPerKwh: '',
    exportPerKwh: '',
    exportPayment: 'metered',
    windows: [],
  };
}

export function emptyWindow(): WindowForm {
  return { days: [...DAYS], start: '', end: '', clock: 'civil', importPerKwh: '', exportPerKwh: '' };
}

export function fromTariff(tariff: DatedTariff, from: string): TariffForm {
  return {
    from: tariff.from ?? from,
    currency: tariff.currency,
    fuelPerKwh: toText(tariff.fuelPerKwh),
    importPerKwh: toText(tariff.importPerKwh),
    exportPerKwh: toText(tariff.exportPerKwh),
    exportPayment: tariff.exportPayment ?? 'metered',
    windows: (tariff.windows ?? []).map((window) => ({
      days: [...window.days],
      start: window.start,
      end: window.end,
      clock: window.clock,
      importPerKwh: toText(window.importPerKwh),
      exportPerKwh: toText(window.exportPerKwh),
    })),
  };
}

const LABELS: Record<string, string> = {
  from: 'Holds from',
  currency: 'Currency',
  fuelPerKwh: 'Fuel price',
  importPerKwh: 'Import price',
  exportPerKwh: 'Export price',
  windows: 'Windows',
  'windows.days': 'Days of the window',
  'windows.start': 'Window from',
  'windows.end': 'Window to',
  'windows.importPerKwh': 'Import price in the window',
  'windows.exportPerKwh': 'Export price in the window',
};

/** The screen's name for a path of the tariff. */
export function tariffLabel(path: string): string {
  return LABELS[path.replace(/\.\d+/g, '')] ?? path;
}

/**
 * The tariff that the form describes. Without export payment the export price is not asked and goes as 0.
 * @returns the tariff, and what is wrong; with any issue it is not to be sent
 */
export function toTariff(form: TariffForm): { tariff: DatedTariff; issues: Issue[] } {
  const read = new FieldReader();
  const price = (path: string, text: string): number => read.required(path, tariffLabel(path), text, parsePrice, 0);
  const from = read.required('from', tariffLabel('from'), form.from, parseDate, '1970-01-01');
  const currency = form.currency.trim().toUpperCase();
  if (!/^[A-Z]{3}$/.test(currency))
    read.say('currency', tariffLabel('currency'), 'Write the code of three letters, such as GBP or EUR.');
  const windows = form.windows.map((window, index) => {
    const at = (name: string): string => `windows.${index}.${name}`;
    if (window.days.length === 0) read.say(at('days'), tariffLabel('windows.days'), 'Choose at least one day.');
    const start = read.required(at('start'), tariffLabel('windows.start'), window.start, (t) => parseClock(t), '00:00');
    const end = read.required(at('end'), tariffLabel('windows.end'), window.end, (t) => parseClock(t, true), '24:00');
    if (window.start.trim() && start === end)
      read.say(at('end'), tariffLabel('windows.end'), 'A window ends at another time than it begins.');
    const importPerKwh = read.optional(
      at('importPerKwh'),
      tariffLabel('windows.importPerKwh'),
      window.importPerKwh,
      parsePrice,
    );
    const exportPerKwh = read.optional(
      at('exportPerKwh'),
      tariffLabel('windows.exportPerKwh'),
      window.exportPerKwh,
      parsePrice,
    );
    if (window.importPerKwh.trim() === '' && window.exportPerKwh.trim() === '')
      read.say(at('importPerKwh'), tariffLabel('windows.importPerKwh'), 'Give a price that holds in this window.');
    return {
      days: DAYS.filter((day) => window.days.includes(day)),
      start,
      end,
      clock: window.clock,
      ...(importPerKwh !== undefined && { importPerKwh }),
      ...(exportPerKwh !== undefined && { exportPerKwh }),
    };
  });
  const tariff: DatedTariff = {
    from,
    currency,
    fuelPerKwh: price('fuelPerKwh', form.fuelPerKwh),
    importPerKwh: price('importPerKwh', form.importPerKwh),
    exportPerKwh:
      form.exportPayment === 'none' && form.exportPerKwh.trim() === '' ? 0 : price('exportPerKwh', form.exportPerKwh),
    exportPayment: form.exportPayment,
    ...(windows.length > 0 && { windows }),
  };
  return { tariff, issues: read.issues };
}

const EURO = 'AT BE BG CY DE EE ES FI FR GR HR IE IT LT LU LV MT NL PT SI SK'.split(' ');
const CURRENCIES: Record<string, string> = {
  GB: 'GBP',
  AU: 'AUD',
  NZ: 'NZD',
  US: 'USD',
  CA: 'CAD',
  CH: 'CHF',
  NO: 'NOK',
  SE: 'SEK',
  DK: 'DKK',
  PL: 'PLN',
  CZ: 'CZK',
  ZA: 'ZAR',
};

/** The currency to begin a tariff with, by country; empty where it is not known. */
export function currencyOf(country: string | null): string {
  if (country === null) return '';
  return EURO.includes(country) ? 'EUR' : (CURRENCIES[country] ?? '');
}
