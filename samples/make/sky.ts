import { chance, persistent, PURPOSE } from './random.ts';

/** Place in the year as the north feels it: −1 in midwinter, +1 in midsummer. */
export function season(day: number, latitude: number): number {
  const turn = Math.cos((2 * Math.PI * (((day - 10957) % 365.25) - 171)) / 365.25);
  return latitude < 0 ? -turn : turn;
}

/** A day's weather: how much of the cloudless sun comes through, minute by minute, and the air. */
export interface Weather {
  /** Share of the cloudless radiation, per minute of the day. */
  through: Float64Array;
  /** Mean outdoor temperature, °C. */
  outdoorC: number;
  /** Share of sunshine of the day, 0..1. */
  bright: number;
}

/** Normal distribution function (Abramowitz and Stegun 26.2.17 gives it to 1e-7; the logistic form is enough here). */
function normalShare(z: number): number {
  return 1 / (1 + Math.exp(-1.702 * z));
}

/**
 * The weather of one civil day, the same for the same seed and date. Dull and bright days come in runs; a middling day
 * is a train of clouds of minutes to tens of minutes.
 * @param day day number; @param minutes minutes in the day; @param clarity shifts the climate, 0 = Great Britain
 */
export function weatherOf(seed: number, day: number, minutes: number, latitude: number, clarity = 0): Weather {
  const turn = season(day, latitude);
  const bright = normalShare(persistent(seed, PURPOSE.skyDay, day, 0.55) - 0.2 + 0.17 * turn + clarity);
  const dice = chance(seed, PURPOSE.sky, day);
  const outdoorC =
    10.5 + 6 * turn + 2.2 * persistent(seed, PURPOSE.weather, day, 0.75) + (latitude < 0 ? 4 : 0) + 3 * clarity;
  const through = new Float64Array(minutes);
  const open = Math.min(1, Math.max(0, (bright - 0.3) / 0.55));
  const veil = bright < 0.3 ? 0.13 + 0.9 * bright : 0.36 + 0.1 * dice.normal();
  const train = 4 + 30 * dice.next();
  let inSun = dice.next() < open;
  let left = 0;
  let goal = 0;
  let now = inSun ? 1 : veil;
  let drift = dice.normal();
  for (let minute = 0; minute < minutes; minute++) {
    if (left <= 0) {
      inSun = open >= 1 ? true : open <= 0 ? false : !inSun;
      left = 1 + dice.exponential(inSun ? train * open * 2 : train * (1 - open) * 2);
      goal = inSun ? 0.97 + 0.03 * dice.normal() : Math.max(0.06, veil * (1 + 0.25 * dice.normal()));
      if (open >= 1) left = 60;
    }
    left--;
    drift += -drift / 90 + Math.sqrt(2 / 90) * dice.normal();
    const aim = goal * (inSun ? 1 : Math.max(0.3, 1 + 0.25 * drift));
    now += (aim - now) * 0.55;
    through[minute] = Math.max(0.03, Math.min(1.12, now + (open > 0 && open < 1 ? 0.02 * dice.normal() : 0)));
  }
  return { through, outdoorC, bright };
}
