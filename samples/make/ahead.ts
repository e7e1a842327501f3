import { clockMinutes, type ZoneClock } from './civil.ts';
import { find, type Fault } from './faults.ts';
import type { Home } from './home.ts';
import { appliancesOf, away, coldFeed, drawsOf } from './household.ts';
import { chance, persistent, PURPOSE } from './random.ts';
import { season, weatherOf } from './sky.ts';
import { beyondAir, clearSky, onPlane, sunOfDay, type SunPlace } from './sun.ts';

export const STEP_SECONDS = 10;
/** Steps in a minute. */
export const STEPS = 60 / STEP_SECONDS;

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
export interface DayAhead {
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

/** The day ahead of a home: the same for the same seed and date. */
export function dayAhead(home: Home, clock: ZoneClock, day: number, faults: readonly Fault[]): DayAhead {
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
