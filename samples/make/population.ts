import { like, TYPICAL, type Home } from './home.ts';
import { chance } from './random.ts';

/** Places of invented homes: zone, latitude, longitude, brightness, how much warmer the mains run. */
const PLACES: readonly [string, number, number, number, number][] = [
  ['Europe/London', 51.5, -0.6, 0, 0],
  ['Europe/London', 53.8, -1.6, 0, -0.5],
  ['Europe/London', 57.2, -2.6, -0.1, -1.5],
  ['Europe/Dublin', 53.1, -7.2, -0.1, 0],
  ['Europe/Berlin', 51.2, 9.4, 0.1, -0.5],
  ['Europe/Madrid', 40.1, -3.2, 0.8, 3],
  ['America/New_York', 42.3, -74.2, 0.4, 0],
  ['Australia/Hobart', -42.4, 147.1, 0.3, 1],
  ['Australia/Adelaide', -34.6, 138.9, 0.8, 5],
  ['Pacific/Auckland', -37.3, 175.1, 0.4, 3],
];

/** Homes whose figures differ as homes do, the same for the same seed. Sizes and habits are invented, within common practice. */
export function homeOf(seed: number): Home {
  const dice = chance(seed, 900);
  const pick = <T>(list: readonly T[]): T => list[Math.floor(dice.next() * list.length)];
  const [timeZone, latitude, longitude, clarity, coldOffsetK] = pick(PLACES);
  const occupants = dice.between(1.3, 4.6);
  const litres = pick([120, 150, 180, 210, 250, 300]);
  const sunward = latitude < 0 ? 0 : 180;
  const kwp = dice.between(2.2, 5.8);
  const middle = { channel: 'tankMiddle', height: 0.5, offsetK: dice.between(-0.4, 0.4) } as const;
  const top = { channel: 'tankTop', height: dice.between(0.78, 0.9), offsetK: dice.between(-0.4, 0.4) } as const;
  const bottom = { channel: 'tankBottom', height: dice.between(0.15, 0.28), offsetK: dice.between(-0.4, 0.4) } as const;
  const sensors = pick([[top], [top, bottom], [top, bottom], [top, middle, bottom]]);
  const [start, end] = pick([
    ['16:00', '18:00'],
    ['16:30', '18:30'],
    ['17:00', '19:00'],
    ['17:30', '20:00'],
  ]);
  const windows =
    dice.next() < 0.25
      ? [
          { start: '05:30', end: '06:45' },
          { start, end },
        ]
      : [{ start, end }];
  return like(TYPICAL, {
    seed,
    timeZone,
    latitude,
    longitude: longitude + dice.between(-0.5, 0.5),
    clarity,
    coldOffsetK,
    panels: [{ kwp, tilt: dice.between(15, 45), azimuth: (sunward + dice.between(-55, 55) + 360) % 360 }],
    inverterW: pick([3000, 3680, 5000]),
    mainsVolts: dice.between(228, 246),
    house: {
      occupants,
      kettles: Math.round(2 + 1.4 * occupants),
      baseW: dice.between(90, 260),
      peaks: dice.between(0.7, 1.5),
    },
    people: {
      litresAt40PerHead: dice.between(45, 72),
      bathShare: dice.between(0, 0.5),
      awayWeekends: dice.between(0, 0.15),
      holidayDays: Math.round(dice.between(0, 16)),
    },
    cylinder: {
      litres,
      uaWPerK: (0.75 + 0.0042 * litres) * dice.between(0.75, 1.5),
      slimness: dice.between(2, 3.4),
      sensors,
    },
    heaters: [
      {
        position: 'lower',
        ratedW: pick([2700, 3000, 3000, 3000]),
        ratedVolts: pick([230, 240]),
        low: 0.1,
        high: dice.between(0.16, 0.26),
        thermostatC: dice.between(60, 66),
        hysteresisK: dice.between(4, 7),
      },
    ],
    boiler: {
      efficiency: dice.between(0.64, 0.78),
      coilHigh: dice.between(0.3, 0.45),
      maxW: dice.between(10000, 20000),
    },
    relay: { windows, targetC: dice.between(55, 60), sensorHeight: dice.between(0.5, 0.75) },
    ambient: { meanC: dice.between(18, 23) },
    meters: { diverterError: dice.between(-0.015, 0.015), temperatureStep: pick([0.1, 0.0625, 0.5]) },
  });
}
