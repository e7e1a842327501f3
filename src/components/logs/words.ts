import type { LogStatus } from '../../../shared/api/log.ts';
import type { Channel, Kind, Unit } from '../../../shared/units/channels.ts';

/** What each channel is, in words for the person who maps a column to it. */
export const CHANNEL_SAYS: Record<Channel, string> = {
  grid: 'Signed: import counts positive, export negative',
  export: 'Sent to the grid',
  import: 'Bought from the grid',
  generation: 'Made by the panels',
  diversion: 'Sent into the cylinder’s heater by the diverter',
  diversion2: 'The same for a second heater',
  tankTop: 'Upper sensor of the cylinder',
  tankMiddle: 'Middle sensor of the cylinder',
  tankBottom: 'Lower sensor of the cylinder',
  relay: 'On: the boiler may heat the cylinder',
  gas: 'Fuel that was counted',
  coldFeed: 'Water coming in',
  ambient: 'Air around the cylinder',
  battery: 'Signed: charging counts positive',
  charger: 'Sent into a car',
};

export const KIND_WORDS: Record<Kind, { name: string; says: string }> = {
  power: { name: 'Power', says: 'the rate at that time or over that step' },
  energy: { name: 'Energy per step', says: 'the amount within each row’s step' },
  register: { name: 'Meter register', says: 'a total that counts up' },
  level: { name: 'Level', says: 'a value that stands at that instant' },
  state: { name: 'State', says: 'on or off' },
};

export const UNIT_WORDS: Record<Unit, string> = {
  W: 'W',
  kW: 'kW',
  Wh: 'Wh',
  kWh: 'kWh',
  MWh: 'MWh',
  MJ: 'MJ',
  m3: 'm³',
  litre: 'litres',
  ft3: 'ft³',
  ft3x100: 'hundreds of ft³',
  C: '°C',
  F: '°F',
  state: 'on / off',
};

export type Stamp = 'start' | 'end' | 'instant';
export const STAMP_WORDS: Record<Stamp, string> = {
  start: 'The time is the start of the step it stands for',
  end: 'The time is the end of the step it stands for',
  instant: 'The value holds at that very time',
};
export const STAMP_SHORT: Record<Stamp, string> = { start: 'start of step', end: 'end of step', instant: 'instant' };

export const ENCODINGS: { value: string; title: string }[] = [
  { value: 'utf-8', title: 'UTF-8' },
  { value: 'windows-1252', title: 'Western (windows-1252)' },
  { value: 'iso-8859-15', title: 'Western (iso-8859-15)' },
  { value: 'windows-1250', title: 'Central European (windows-1250)' },
  { value: 'utf-16le', title: 'UTF-16, little end first' },
  { value: 'utf-16be', title: 'UTF-16, big end first' },
];

export const DELIMITERS: { value: string; title: string }[] = [
  { value: ',', title: 'Comma  ,' },
  { value: ';', title: 'Semicolon  ;' },
  { value: '\t', title: 'Tab' },
  { value: '|', title: 'Bar  |' },
  { value: ' ', title: 'One blank' },
  { value: '  ', title: 'A run of blanks' },
];

export const TIME_FORMATS: { value: string; title: string }[] = [
  { value: 'iso', title: 'ISO 8601 (2026-03-29T14:05:00)' },
  { value: 'dd/MM/yyyy HH:mm', title: 'Day first: 29/03/2026 14:05' },
  { value: 'dd/MM/yyyy HH:mm:ss', title: 'Day first with seconds: 29/03/2026 14:05:00' },
  { value: 'MM/dd/yyyy HH:mm', title: 'Month first: 03/29/2026 14:05' },
  { value: 'MM/dd/yyyy HH:mm:ss', title: 'Month first with seconds: 03/29/2026 14:05:00' },
  { value: 'dd.MM.yyyy HH:mm', title: 'Day first with points: 29.03.2026 14:05' },
  { value: 'dd.MM.yyyy HH:mm:ss', title: 'Day first with points and seconds: 29.03.2026 14:05:00' },
  { value: 'yyyy-MM-dd HH:mm', title: 'Year first: 2026-03-29 14:05' },
  { value: 'yyyy-MM-dd HH:mm:ss', title: 'Year first with seconds: 2026-03-29 14:05:00' },
  { value: 'yyyy/MM/dd HH:mm', title: 'Year first with strokes: 2026/03/29 14:05' },
  { value: 'epochSeconds', title: 'Seconds since 1970' },
  { value: 'epochMilliseconds', title: 'Milliseconds since 1970' },
  { value: 'excelSerial', title: 'Spreadsheet day number' },
];

/** One word per status, for the mark in front of a log; the sentence beside it says the rest. */
export const STATUS_WORDS: Record<LogStatus, string> = {
  waiting: 'Waiting',
  reading: 'Reading',
  asking: 'To be answered',
  refused: 'Refused',
  kept: 'Kept',
  failed: 'Failed',
  withdrawn: 'Withdrawn',
};

/** The title of a choice, or the value itself where the list has none. */
export function titleOf(list: readonly { value: string; title: string }[], value: string): string {
  return list.find((one) => one.value === value)?.title ?? value;
}
