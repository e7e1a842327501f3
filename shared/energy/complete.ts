import type { Day, FigureName } from '../api/day.ts';
import { type Channel, TANK_CHANNELS } from '../units/channels.ts';

/** A day is complete for a figure when each of its channels covers this share of it. */
export const COMPLETE = 0.95;

type Needs = (day: Day) => readonly Channel[];

/** Channels of which those that were logged on the day count; at least one must be. */
const logged =
  (...channels: Channel[]): Needs =>
  (day) =>
    channels.filter((channel) => day.coverage[channel] !== undefined);

const HEATERS = logged('diversion', 'diversion2');
/** Diverted is heater less bought heat, for which import is set against it where there is any. */
const DIVERTED: Needs = (day) => (HEATERS(day).length ? logged('diversion', 'diversion2', 'import')(day) : []);
const CAUGHT: Needs = (day) => (DIVERTED(day).length ? [...DIVERTED(day), 'export'] : []);
const TANK = logged(...TANK_CHANNELS);
const BALANCE: Needs = (day) => (TANK(day).length && HEATERS(day).length ? [...TANK(day), ...HEATERS(day)] : []);

/** The channels on which each figure of a day rests. */
const CHANNELS_OF: Record<FigureName, Needs> = {
  exportKwh: () => ['export'],
  importKwh: () => ['import'],
  generationKwh: () => ['generation'],
  heaterKwh: HEATERS,
  boughtHeatKwh: DIVERTED,
  divertedKwh: DIVERTED,
  surplusCaught: CAUGHT,
  usefulHeatKwh: DIVERTED,
  fuelHeatKwh: BALANCE,
  drawHeatKwh: BALANCE,
  standingLossKwh: TANK,
  storeChangeKwh: TANK,
  residualKwh: BALANCE,
  solarFraction: (day) => [...new Set([...BALANCE(day), ...DIVERTED(day)])],
  litresAt40: DIVERTED,
  gasDisplacedKwh: DIVERTED,
  gasDisplacedM3: DIVERTED,
  fuelDisplacedLitres: DIVERTED,
  fuelMeasuredKwh: () => ['gas'],
  fuelMeasuredM3: () => ['gas'],
  netSaving: DIVERTED,
  co2SavedKg: DIVERTED,
  missedSunKwh: (day) => (BALANCE(day).length ? [...BALANCE(day), 'export'] : []),
  missedSunValue: (day) => (BALANCE(day).length ? [...BALANCE(day), 'export'] : []),
};

/** Whether a figure of a day is known and each of its channels covers 95 % of the day. */
export function completeFor(day: Day, name: FigureName): boolean {
  const channels = CHANNELS_OF[name](day);
  return channels.length > 0 && channels.every((channel) => (day.coverage[channel] ?? 0) >= COMPLETE);
}
