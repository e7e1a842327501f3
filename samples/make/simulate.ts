import { civilDate, clockMinutes, dayNumber, ZoneClock } from './civil.ts';
import { faultsOn, find, type Fault } from './faults.ts';
import type { Home } from './home.ts';
import { appliancesOf, away, coldFeed, drawsOf } from './household.ts';
import { conditionsOf, Plant, type Conditions, type Outside } from './plant.ts';
import { chance, persistent, PURPOSE } from './random.ts';
import { season, weatherOf } from './sky.ts';
import { beyondAir, clearSky, onPlane, sunOfDay, type SunPlace } from './sun.ts';

export const STEP_SECONDS = 10;
const STEPS = 60 / STEP_SECONDS;
/** One minute at one watt, kWh. */
const KWH = 1 / 60_000;
/** Days run before the first one kept, so that the store has forgotten how it began. */
const WARM_UP_DAYS = 4;

/** True flows per minute; mean power over the minute in W unless the name says otherwise. */
export const FLOWS = [
  'panels',
  'load',
  'battery',
  'lower',
  'upper',
  'bought',
  'import',
  'export',
  'clampExport',
  'fuelHeat',
  'fuel',
  'roomsFuel',
  'draw',
  'loss',
  'litres',
  'relay',
  'coldC',
  'ambientC',
] as const;
export type Flow = (typeof FLOWS)[number];

/** True sums of a civil day, kWh unless the name says otherwise. */
export interface TrueDay {
  date: string;
  hours: number;
  generation: number;
  load: number;
  export: number;
  import: number;
  heater: number;
  bought: number;
  diverted: number;
  fuelHeat: number;
  fuel: number;
  draw: number;
  loss: number;
  /** Heat held at the end less at the beginning. */
  store: number;
  litres: number;
  missedSun: number;
  /** Share of sunshine in the weather, 0..1. */
  bright: number;
  away: boolean;
  /** Hours with the hottest layer at 60 °C or more. */
  hoursAt60: number;
}

export interface Run {
  home: Home;
  faults: Fault[];
  /** First minute, ms; minute i runs from `start + 60000 i`. */
  start: number;
  minutes: number;
  flow: Record<Flow, Float32Array>;
  /** True temperature at each of the home's sensors at the beginning of each minute, °C. */
  sensors: Float32Array[];
  /** Heat held above 0 °C at the beginning of each minute, Wh. */
  heldWh: Float64Array;
  days: TrueDay[];
}

/** Marks the minutes of the clock that lie in windows. */
function windowed(windows: { start: string; end: string }[]): Uint8Array {
  const marks = new Uint8Array(1440);
  for (const { start, end } of windows) {
    const a = clockMinutes(start);
    const b = clockMinutes(end);
    for (let m = a; m !== b % 1440; m = (m + 1) % 1440) marks[m] = 1;
  }
  return marks;
}

/** What one day brings from outside, before the plant answers. */
interface DayAhead {
  panels: Float64Array;
  load: Float64Array;
  taps: Float64Array;
  useC: Float64Array;
  allowed: Uint8Array;
  boost: Uint8Array;
  volts: Float64Array;
  ambient: Float64Array;
  rooms: Float64Array;
  coldC: number;
  bright: number;
  away: boolean;
}

function dayAhead(home: Home, clock: ZoneClock, day: number, faults: readonly Fault[]): DayAhead {
  const from = clock.startOfDay(day);
  const to = clock.startOfDay(day + 1);
  const minutes = Math.round((to - from) / 60_000);
  const steps = minutes * STEPS;
  const weather = weatherOf(home.seed, day, minutes, home.latitude, home.clarity);
  const dice = chance(home.seed, PURPOSE.volts, day);
  const panels = panelsOf(home, from, to, weather.through, weather.outdoorC);

  const load = new Float64Array(steps).fill(home.house.baseW);
  for (const event of appliancesOf(home, day)) {
    const last = Math.min(steps, Math.round((event.at + event.seconds) / STEP_SECONDS));
    for (let s = Math.round(event.at / STEP_SECONDS); s < last; s++) load[s] += event.rate;
  }
  const taps = new Float64Array(steps);
  const useC = new Float64Array(steps);
  for (const draw of drawsOf(home, day)) {
    const first = Math.min(steps - 1, Math.round(draw.at / STEP_SECONDS));
    const count = Math.max(1, Math.round(draw.seconds / STEP_SECONDS));
    const litres = (draw.rate * draw.seconds) / count;
    for (let s = first; s < Math.min(steps, first + count); s++) {
      useC[s] = (useC[s] * taps[s] + draw.useC * litres) / (taps[s] + litres);
      taps[s] += litres;
    }
  }
  const before = find(faults, 'backupBeforeSun');
  const left = find(faults, 'boostLeftOn');
  const windows = windowed(before ? [before] : home.relay.windows);
  const boosts = windowed(left ? [...home.boosts, left] : home.boosts);
  const wallAtStart = clock.wall(from);
  const changes = minutes !== 1440;
  const allowed = new Uint8Array(minutes);
  const boost = new Uint8Array(minutes);
  const volts = new Float64Array(minutes);
  const ambient = new Float64Array(minutes);
  const rooms = new Float64Array(minutes);
  const cold = Math.max(0, 15.5 - weather.outdoorC);
  const roomsW = cold > 1.5 ? (cold * home.house.roomsWPerK * 24) / 14 / 0.86 : 0;
  const turn = season(day, home.latitude);
  const lift = 0.5 * persistent(home.seed, PURPOSE.meters, day, 0.7);
  let sag = dice.normal();
  for (let minute = 0; minute < minutes; minute++) {
    const at = changes ? clock.wall(from + minute * 60_000) : wallAtStart + minute * 60_000;
    const wall = Math.floor(at / 60_000) % 1440;
    allowed[minute] = windows[wall];
    boost[minute] = boosts[wall];
    sag += -sag / 40 + Math.sqrt(2 / 40) * dice.normal();
    volts[minute] = home.mainsVolts + 1.6 * sag;
    const swing = home.ambient.dayK * Math.cos((2 * Math.PI * (wall - 1020)) / 1440);
    ambient[minute] = home.ambient.meanC + home.ambient.seasonK * turn + swing + lift;
    const awake = wall >= 360 && wall < 1320;
    rooms[minute] = awake && minute % 20 < 14 ? roomsW * (16 / 14) : 0;
  }
  return {
    panels,
    load,
    taps,
    useC,
    allowed,
    boost,
    volts,
    ambient,
    rooms,
    coldC: coldFeed(home, day),
    bright: weather.bright,
    away: away(home, day),
  };
}

/**
 * Output of the panels at the inverter's terminals, W, per minute from a civil day's beginning: radiation on each
 * plane, cells above 25 °C losing 0.4 % per kelvin, 15 % lost in glass, dirt, cable and inverter, and the inverter's limit.
 */
function panelsOf(home: Home, from: number, to: number, through: Float64Array, outdoorC: number): Float64Array {
  const place = sunOfDay(from, to, home.latitude, home.longitude);
  const sun: SunPlace = { altitude: 0, azimuth: 0 };
  const out = new Float64Array(through.length);
  for (let minute = 0; minute < through.length; minute++) {
    place(from + minute * 60_000 + 30_000, sun);
    if (sun.altitude <= 0) continue;
    const sinAlt = Math.sin((sun.altitude * Math.PI) / 180);
    const level = clearSky(sinAlt) * through[minute];
    const outside = beyondAir(from + minute * 60_000, sinAlt);
    let watts = 0;
    for (const { kwp, tilt, azimuth } of home.panels) {
      const plane = onPlane(level, outside, sun, tilt, azimuth);
      const cell = outdoorC + 3 + 0.028 * plane;
      watts += kwp * plane * 0.85 * (1 - 0.004 * (cell - 25));
    }
    out[minute] = watts < 12 ? 0 : Math.min(home.inverterW, watts);
  }
  return out;
}

class Battery {
  private held: number;
  private readonly full: number;
  constructor(private readonly home: Home) {
    this.full = (home.battery?.kwh ?? 0) * 1000;
    this.held = this.full / 2;
  }
  /** Power taken (+) or given (−) for a step, W: it takes surplus first and covers the household's load, nine tenths come back. */
  step(loadLessPanels: number, seconds: number): number {
    if (!this.home.battery) return 0;
    const limit = this.home.battery.kw * 1000;
    const hours = seconds / 3600;
    if (loadLessPanels < 0) {
      const watts = Math.min(limit, -loadLessPanels, (this.full - this.held) / hours / 0.95);
      this.held += watts * hours * 0.95;
      return watts;
    }
    const watts = Math.min(limit, loadLessPanels, (this.held * 0.95) / hours);
    this.held -= (watts * hours) / 0.95;
    return -watts;
  }
}

/**
 * Runs a home from one civil date to another (the second not included), 10 seconds at a time.
 * @param options.divert false: the same home, weather and people without the diverter, to see what fuel it saved
 */
export function simulate(
  home: Home,
  from: string,
  to: string,
  faults: readonly Fault[] = [],
  options: { divert?: boolean } = {},
): Run {
  const clock = new ZoneClock(home.timeZone);
  const firstDay = dayNumber(from);
  const endDay = dayNumber(to);
  if (endDay <= firstDay) throw new RangeError(`no days from ${from} to ${to}`);
  const start = clock.startOfDay(firstDay);
  const minutes = Math.round((clock.startOfDay(endDay) - start) / 60_000);
  const flow = Object.fromEntries(FLOWS.map((name) => [name, new Float32Array(minutes)])) as Run['flow'];
  const columns = FLOWS.map((name) => flow[name]);
  const sensors = home.cylinder.sensors.map(() => new Float32Array(minutes));
  const heldWh = new Float64Array(minutes);
  const days: TrueDay[] = [];
  const divert = options.divert ?? true;
  const plant = new Plant(home, 45, divert);
  const spare = new Plant(home, 45, divert);
  const battery = new Battery(home);
  let at = 0;
  for (let day = firstDay - WARM_UP_DAYS; day < endDay; day++) {
    const today = faultsOn(faults, civilDate(day));
    const ahead = dayAhead(home, clock, day, today);
    const truth = runDay(home, plant, spare, battery, ahead, conditionsOf(today), (minute, sums) => {
      if (day < firstDay) return;
      const i = at + minute;
      columns.forEach((values, c) => (values[i] = sums.flow[c]));
      sensors.forEach((values, s) => (values[i] = sums.sensors[s]));
      heldWh[i] = sums.heldWh;
    });
    if (day < firstDay) continue;
    at += ahead.volts.length;
    days.push({
      date: civilDate(day),
      hours: ahead.volts.length / 60,
      bright: ahead.bright,
      away: ahead.away,
      ...truth,
    });
  }
  return { home, faults: [...faults], start, minutes, flow, sensors, heldWh, days };
}

/** The place of each flow in the sums of a minute. */
const AT = Object.fromEntries(FLOWS.map((name, i) => [name, i])) as Record<Flow, number>;

interface MinuteSums {
  flow: Float64Array;
  sensors: number[];
  heldWh: number;
}

type DaySums = Omit<TrueDay, 'date' | 'hours' | 'bright' | 'away'>;

function runDay(
  home: Home,
  plant: Plant,
  /** The same plant had the backup been held off since midnight; takes over when fuel first heats. */
  spare: Plant,
  battery: Battery,
  ahead: DayAhead,
  now: Conditions,
  keep: (minute: number, sums: MinuteSums) => void,
): DaySums {
  const f = new Float64Array(FLOWS.length);
  const day: DaySums = {
    generation: 0,
    load: 0,
    export: 0,
    import: 0,
    heater: 0,
    bought: 0,
    diverted: 0,
    fuelHeat: 0,
    fuel: 0,
    draw: 0,
    loss: 0,
    store: 0,
    litres: 0,
    missedSun: 0,
    hoursAt60: 0,
  };
  const efficiency = home.boiler?.efficiency ?? 1;
  const outside: Outside = {
    seconds: STEP_SECONDS,
    baseW: 0,
    panelsW: 0,
    volts: 0,
    tapLitres: 0,
    useC: 40,
    coldC: ahead.coldC,
    ambientC: 0,
    allowed: false,
    boost: false,
  };
  const held: Conditions = { ...now, noHeat: true };
  const before = plant.cylinder.heldWh();
  const top = plant.cylinder.temps.length - 1;
  let without: Plant | null = null;
  for (let minute = 0; minute < ahead.volts.length; minute++) {
    f.fill(0);
    const heldWh = plant.cylinder.heldWh();
    const sensors = home.cylinder.sensors.map((sensor) => plant.cylinder.at(sensor.height));
    const relay = plant.relay || (now.relay === 'stuck' && now.relayShown);
    outside.ambientC = ahead.ambient[minute];
    outside.volts = ahead.volts[minute];
    outside.allowed = ahead.allowed[minute] === 1;
    outside.boost = ahead.boost[minute] === 1;
    if (plant.cylinder.temps[top] >= 60) day.hoursAt60 += 1 / 60;
    const next = ahead.panels[Math.min(minute + 1, ahead.panels.length - 1)];
    let missed = 0;
    for (let s = 0; s < STEPS; s++) {
      const step = minute * STEPS + s;
      const panels = ahead.panels[minute] + ((next - ahead.panels[minute]) * s) / STEPS;
      const load = ahead.load[step];
      const stored = battery.step(load - panels, STEP_SECONDS);
      outside.panelsW = panels;
      outside.baseW = load + stored - panels;
      outside.tapLitres = ahead.taps[step];
      outside.useC = ahead.useC[step];
      const mayHeat = outside.allowed || now.relay === 'stuck' || plant.coilW > 0;
      if (without === null && mayHeat) spare.become(plant);
      plant.step(outside, now);
      if (without === null && plant.coilW > 0) without = spare;
      without?.step(outside, held);
      f[AT.panels] += panels - plant.curtailedW;
      f[AT.load] += load;
      f[AT.battery] += stored;
      f[AT.lower] += plant.lowerW;
      f[AT.upper] += plant.upperW;
      f[AT.bought] += plant.boughtW;
      f[AT.import] += Math.max(0, plant.gridW);
      f[AT.export] += Math.max(0, -plant.gridW);
      f[AT.clampExport] += Math.max(0, -plant.seenW);
      f[AT.fuelHeat] += plant.coilW;
      f[AT.draw] += plant.drawWh;
      f[AT.litres] += plant.litres;
      if (without) {
        const sunThen = without.lowerW + without.upperW - without.boughtW;
        missed += sunThen - (plant.lowerW + plant.upperW - plant.boughtW);
      }
    }
    const lost = plant.rest(60, outside.ambientC, now);
    without?.rest(60, outside.ambientC, now);
    for (let i = AT.panels; i <= AT.fuelHeat; i++) f[i] /= STEPS;
    f[AT.fuel] = f[AT.fuelHeat] / efficiency;
    f[AT.roomsFuel] = ahead.rooms[minute];
    f[AT.draw] *= 60;
    f[AT.loss] = lost * 60;
    f[AT.relay] = relay ? 1 : 0;
    f[AT.coldC] = ahead.coldC;
    f[AT.ambientC] = outside.ambientC;
    day.generation += f[AT.panels] * KWH;
    day.load += f[AT.load] * KWH;
    day.export += f[AT.export] * KWH;
    day.import += f[AT.import] * KWH;
    day.heater += (f[AT.lower] + f[AT.upper]) * KWH;
    day.bought += f[AT.bought] * KWH;
    day.fuelHeat += f[AT.fuelHeat] * KWH;
    day.draw += f[AT.draw] * KWH;
    day.loss += f[AT.loss] * KWH;
    day.litres += f[AT.litres];
    day.missedSun += (missed / STEPS) * KWH;
    keep(minute, { flow: f, sensors, heldWh });
  }
  day.diverted = day.heater - day.bought;
  day.fuel = day.fuelHeat / efficiency;
  day.store = (plant.cylinder.heldWh() - before) / 1000;
  return day;
}
