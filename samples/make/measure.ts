import { dayNumber, MINUTE, ZoneClock } from './civil.ts';
import type { Fault } from './faults.ts';
import { chance, hash, PURPOSE } from './random.ts';
import type { Run } from './simulate.ts';

/** What can be logged in a simulated home. Powers in W, temperatures in °C, relay 0 or 1, gas as W of fuel burnt. */
export const MEASURED = [
  'grid',
  'export',
  'import',
  'generation',
  'diversion',
  'diversion2',
  'tankTop',
  'tankMiddle',
  'tankBottom',
  'relay',
  'gas',
  'coldFeed',
  'ambient',
  'battery',
] as const;
export type MeasuredName = (typeof MEASURED)[number];

const LEVELS: ReadonlySet<string> = new Set(['tankTop', 'tankMiddle', 'tankBottom', 'coldFeed', 'ambient']);
const TANK = ['tankTop', 'tankMiddle', 'tankBottom'] as const;

/** Whether a channel is an instant's value (temperature, relay) rather than a mean over the minute. */
export function isLevel(channel: string): boolean {
  return LEVELS.has(channel) || channel === 'relay';
}

/**
 * What the meters and sensors of a run wrote, per minute: powers are means over the minute that begins at
 * `start + 60000 i`, temperatures and the relay the value at that instant. NaN: nothing was logged.
 */
export interface Measured {
  start: number;
  minutes: number;
  channels: Partial<Record<MeasuredName, Float64Array>>;
  /** Minutes at which a counter of a channel starts again from zero. */
  resets: Partial<Record<MeasuredName, number[]>>;
}

/** Turns what truly happened into what was measured, faults of meters, sensors and loggers included. */
export function measure(run: Run): Measured {
  const { home, faults, minutes, flow } = run;
  const clock = new ZoneClock(home.timeZone);
  const channels: Measured['channels'] = {};
  const put = (name: MeasuredName, value: (i: number) => number): void => {
    const values = new Float64Array(minutes);
    for (let i = 0; i < minutes; i++) values[i] = value(i);
    channels[name] = values;
  };
  const whole = (watts: number): number => Math.round(watts / home.meters.stepW) * home.meters.stepW;
  const byClamp = home.meters.exportBy === 'diverterClamp';
  put('export', (i) => whole(byClamp ? flow.clampExport[i] : flow.export[i]));
  put('import', (i) => whole(flow.import[i]));
  put('grid', (i) => whole(flow.import[i] - flow.export[i]));
  put('generation', (i) => whole(flow.panels[i]));
  const gain = 1 + home.meters.diverterError;
  const both = home.heaters.length > 1;
  put('diversion', (i) => whole((flow.lower[i] + (both ? 0 : flow.upper[i])) * gain));
  if (both) put('diversion2', (i) => whole(flow.upper[i] * gain));
  if (home.battery) put('battery', (i) => whole(flow.battery[i]));
  put('relay', (i) => flow.relay[i]);
  if (home.boiler) put('gas', (i) => flow.fuel[i] + otherFuel(run, clock, i));
  const noisy = (name: MeasuredName, offset: number, value: (i: number) => number): void => {
    const dice = chance(home.seed, PURPOSE.meters, hash(MEASURED.indexOf(name)), Math.floor(run.start / MINUTE));
    const { temperatureStep, temperatureNoise } = home.meters;
    put(
      name,
      (i) => Math.round((value(i) + offset + temperatureNoise * dice.normal()) / temperatureStep) * temperatureStep,
    );
  };
  home.cylinder.sensors.forEach((sensor, s) => noisy(sensor.channel, sensor.offsetK, (i) => run.sensors[s][i]));
  noisy('ambient', 0, (i) => flow.ambientC[i]);
  noisy('coldFeed', 0, (i) => flow.coldC[i]);

  const measured: Measured = { start: run.start, minutes, channels, resets: {} };
  const span = (fault: Fault): [number, number] => {
    const index = (date: string): number =>
      Math.min(minutes, Math.max(0, Math.round((clock.startOfDay(dayNumber(date)) - run.start) / MINUTE)));
    return [index(fault.from), fault.to === undefined ? minutes : index(fault.to)];
  };
  for (const fault of [...faults].sort((a, b) => late(a) - late(b)))
    spoil(measured, fault, span(fault), clock, home.seed);
  return measured;
}

/** Fuel that burns for other things in what the gas meter covers, W. */
function otherFuel(run: Run, clock: ZoneClock, i: number): number {
  const covers = run.home.meters.gasCovers;
  if (covers === 'hotWater') return 0;
  const rooms = run.flow.roomsFuel[i];
  if (covers === 'boiler') return rooms;
  const wall = (clock.wall(run.start + i * MINUTE) / MINUTE) % 1440;
  return rooms + (wall >= 1065 && wall < 1095 ? 1800 : 0);
}

/** Faults of a logger come after those of its meters and sensors. */
function late(fault: Fault): number {
  return { logHoles: 3, clockOff: 2, sensorsSwapped: 1 }[fault.kind as string] ?? 0;
}

function spoil(measured: Measured, fault: Fault, [from, to]: [number, number], clock: ZoneClock, seed: number): void {
  const { channels } = measured;
  const at = (channel: string): Float64Array | undefined => channels[channel as MeasuredName];
  switch (fault.kind) {
    case 'exportDead':
      channels.export?.fill(0, from, to);
      if (channels.grid) for (let i = from; i < to; i++) channels.grid[i] = Math.max(0, channels.grid[i]);
      return;
    case 'exportReversed':
      if (channels.export && channels.import) exchange(channels.export, channels.import, from, to);
      if (channels.grid) for (let i = from; i < to; i++) channels.grid[i] = -channels.grid[i];
      return;
    case 'scaleWrong': {
      const values = at(fault.channel);
      if (values) for (let i = from; i < to; i++) values[i] *= fault.factor;
      return;
    }
    case 'sensorFlat': {
      const values = at(fault.channel);
      values?.fill(fault.celsius ?? values[from], from, to);
      return;
    }
    case 'sensorFault': {
      const values = at(fault.channel);
      const dice = chance(seed, PURPOSE.meters, from);
      if (values) for (let i = from; i < to; i++) if (dice.next() < fault.share) values[i] = fault.value;
      return;
    }
    case 'sensorsSwapped': {
      const [top, bottom] = [channels[TANK[0]], channels[TANK[2]] ?? channels[TANK[1]]];
      if (top && bottom) exchange(top, bottom, from, to);
      return;
    }
    case 'registerReset':
      (measured.resets[fault.channel as MeasuredName] ??= []).push(from);
      return;
    case 'clockOff':
      for (const values of Object.values(channels)) shift(values, measured.start, fault, from, to, clock);
      return;
    case 'logHoles':
      for (const [name, values] of Object.entries(channels)) {
        if (fault.channels && !fault.channels.includes(name)) continue;
        if (fault.everyDays === undefined) values.fill(NaN, from, to);
        else {
          for (let hole = from; hole < to; hole += fault.everyDays * 1440)
            values.fill(NaN, hole + 500, Math.min(to, hole + 500 + (fault.hours ?? 4) * 60));
        }
      }
      return;
    default:
      return;
  }
}

function exchange(a: Float64Array, b: Float64Array, from: number, to: number): void {
  for (let i = from; i < to; i++) [a[i], b[i]] = [b[i], a[i]];
}

/** A clock that is ahead stamps what happens now with a later time: at stamp i stands what happened `ahead` minutes before. */
function shift(
  values: Float64Array,
  start: number,
  fault: { minutes: number; summerOnly?: boolean },
  from: number,
  to: number,
  clock: ZoneClock,
): void {
  const old = values.slice();
  const january = clock.offset(start - (start % 31_557_600_000));
  const july = clock.offset(start - (start % 31_557_600_000) + 15_778_800_000);
  const standard = Math.min(january, july);
  for (let i = from; i < to; i++) {
    if (fault.summerOnly && clock.offset(start + i * MINUTE) === standard) continue;
    const source = i - fault.minutes;
    values[i] = source >= 0 && source < old.length ? old[source] : NaN;
  }
}

/** Means of k minutes (levels: the first value); NaN where one of them is missing. */
export function coarse(values: Float64Array, k: number, level: boolean): Float64Array {
  const out = new Float64Array(Math.floor(values.length / k));
  for (let i = 0; i < out.length; i++) {
    if (level) out[i] = values[i * k];
    else {
      let sum = 0;
      for (let j = 0; j < k; j++) sum += values[i * k + j];
      out[i] = sum / k;
    }
  }
  return out;
}

/**
 * A counter of a power, at the beginning of each interval and once more at the end, kWh, cut to its display.
 * @param startKwh what it stood at; @param stepKwh its last digit; @param resets intervals at which it begins again at 0
 */
export function counter(
  watts: Float64Array,
  minutes: number,
  startKwh: number,
  stepKwh: number,
  resets: readonly number[] = [],
): Float64Array {
  const out = new Float64Array(watts.length + 1);
  let held = startKwh;
  const again = new Set(resets);
  for (let i = 0; i <= watts.length; i++) {
    if (again.has(i)) held = 0;
    out[i] = Math.floor(held / stepKwh + 1e-6) * stepKwh;
    if (i < watts.length && !Number.isNaN(watts[i])) held += (watts[i] * minutes) / 60_000;
  }
  return out;
}
