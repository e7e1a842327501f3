import { dayAhead, STEP_SECONDS, STEPS, type DayAhead } from './ahead.ts';
import { Battery } from './battery.ts';
import { civilDate, dayNumber, ZoneClock } from './civil.ts';
import { faultsOn, type Fault } from './faults.ts';
import type { Home } from './home.ts';
import { conditionsOf, Plant, type Conditions, type Outside } from './plant.ts';

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
