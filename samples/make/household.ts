import { weekday } from './civil.ts';
import type { Home } from './home.ts';
import { chance, PURPOSE, type Chance } from './random.ts';
import { season } from './sky.ts';

/** One thing that happens in a day: from `at` seconds after midnight, for so many seconds, at this rate. */
export interface Event {
  at: number;
  seconds: number;
  rate: number;
}

/** Water drawn: `rate` is litres per second at the tap, mixed to `useC` where the store is hotter. */
export interface Draw extends Event {
  useC: number;
}

/**
 * Mean temperature of the mains by month, °C: SAP 10.2 Table J1 "from mains" (from memory, held against a published
 * worksheet). Turned by half a year in the south; straight lines between mid-months.
 */
const MAINS = [8.0, 8.2, 9.3, 12.7, 14.6, 16.7, 18.4, 17.6, 16.6, 14.3, 11.1, 8.5];

/** Temperature of the cold feed on a day, °C. */
export function coldFeed(home: Home, day: number): number {
  const place = ((day - 10957 + (home.latitude < 0 ? 182.6 : 0)) / 30.4375 - 0.5 + 1200) % 12;
  const low = Math.floor(place);
  const u = place - low;
  return MAINS[low] * (1 - u) + MAINS[(low + 1) % 12] * u + home.coldOffsetK;
}

/** Whether nobody is at home on a day: one spell in the local summer, and some weekends. */
export function away(home: Home, day: number): boolean {
  const year = new Date(day * 86_400_000).getUTCFullYear();
  for (const y of [year - 1, year]) {
    const dice = chance(home.seed, PURPOSE.away, y);
    const middle = home.latitude < 0 ? 8 : 205;
    const first = Math.floor(Date.UTC(y, 0, 1) / 86_400_000) + middle + Math.floor(30 * dice.next());
    if (day >= first && day < first + home.people.holidayDays) return true;
  }
  const w = weekday(day);
  if (w !== 0 && w !== 6) return false;
  const saturday = w === 6 ? day : day - 1;
  return chance(home.seed, PURPOSE.away, saturday, 7).next() < home.people.awayWeekends;
}

/** Draws of hot water on a day. Times and volumes differ from day to day; weekends start later. */
export function drawsOf(home: Home, day: number): Draw[] {
  if (away(home, day)) return [];
  const dice = chance(home.seed, PURPOSE.draws, day);
  const late = [0, 6].includes(weekday(day)) ? 5400 : 0;
  const scale = home.people.litresAt40PerHead / 60;
  const draws: Draw[] = [];
  const add = (at: number, litres: number, perMinute: number, useC: number): void => {
    const rate = perMinute / 60;
    draws.push({ at: Math.max(0, at), seconds: Math.max(10, litres / rate), rate, useC });
  };
  const bath = dice.next() < home.people.bathShare;
  const heads = Math.floor(home.house.occupants) + (dice.next() < home.house.occupants % 1 ? 1 : 0);
  for (let head = 0; head < heads; head++) {
    if (dice.next() < 0.12) continue;
    const morning = dice.next() < 0.7;
    const at = morning ? 24300 + late + head * 1500 + 1500 * dice.normal() : 74000 + 3600 * dice.normal();
    add(at, scale * Math.max(15, 43 + 11 * dice.normal()), 7.5, 40);
  }
  if (bath) add(69000 + 3000 * dice.normal(), scale * Math.max(60, 95 + 12 * dice.normal()), 11, 42);
  for (const [hour, share] of [
    [7.9 + late / 3600, 0.8],
    [13, 0.6],
    [19, 0.95],
  ] as const) {
    if (dice.next() < share) add(hour * 3600 + 1800 * dice.normal(), scale * dice.between(6, 16), 6, 47);
  }
  const hands = Math.round(home.house.occupants * 4 + 2 * dice.normal());
  for (let i = 0; i < hands; i++) {
    add(late + 23400 + dice.next() * 58000, scale * dice.between(0.7, 2.8), 4.5, 38);
  }
  return draws;
}

function appliance(list: Event[], at: number, minutes: number, rate: number): void {
  list.push({ at: Math.max(0, at), seconds: Math.max(30, minutes * 60), rate });
}

/** What the household switches on in a day, W, on top of its base. */
export function appliancesOf(home: Home, day: number): Event[] {
  const list: Event[] = [];
  const dice: Chance = chance(home.seed, PURPOSE.load, day);
  const { house } = home;
  const phase = dice.next() * 1500;
  for (let at = phase; at < 90000; at += 2600 + 500 * dice.normal()) appliance(list, at, 14, 85);
  if (away(home, day)) return list;
  const late = [0, 6].includes(weekday(day)) ? 5400 : 0;
  const dusk = 64000 + 11000 * season(day, home.latitude);
  for (let i = 0; i < house.kettles; i++) {
    const at = [25200 + late, 30600 + late, 39000, 49000, 61200, 72000, 78000][i % 7] + 2400 * dice.normal();
    appliance(list, at, dice.between(1.5, 3.8), 2800);
  }
  appliance(list, 25200 + late + 900 * dice.normal(), 60, 260 * house.peaks);
  if (dice.next() < 0.75) appliance(list, 25500 + late + 1500 * dice.normal(), 3.5, 900);
  const supper = 63900 + 2100 * dice.normal();
  for (let at = supper; at < supper + 2700; at += 240) appliance(list, at, 2.3, 2000 * house.peaks);
  appliance(list, 61200 + 1500 * dice.normal(), dice.between(200, 330), 190 * house.peaks);
  if (dusk < 82000) appliance(list, dusk, (82500 - dusk) / 60, 110 * house.peaks);
  if (house.washDays.includes(weekday(day))) {
    const at = 33000 + 12000 * dice.next();
    appliance(list, at + 300, 17, 2000);
    appliance(list, at, 95, 180);
    appliance(list, at + 5400, 8, 450);
  }
  if (dice.next() < 0.55) {
    const at = 71000 + 2400 * dice.normal();
    appliance(list, at, 15, 1900);
    appliance(list, at + 3000, 12, 1900);
    appliance(list, at, 85, 90);
  }
  return list;
}
