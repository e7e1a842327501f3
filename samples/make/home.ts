/** One invented home. Powers in W, temperatures in °C, volumes in litres unless the name says otherwise. */
export interface Home {
  seed: number;
  timeZone: string;
  latitude: number;
  longitude: number;
  /** Shifts the climate's brightness; 0 = Great Britain, 0.8 = a sunny southern country. */
  clarity: number;
  panels: { kwp: number; tilt: number; azimuth: number }[];
  inverterW: number;
  exportLimitW: number | null;
  mainsVolts: number;
  house: {
    baseW: number;
    occupants: number;
    /** Bought and lit evenings, cooking: scales the peaks. */
    peaks: number;
    /** Days of the week with a wash, 0 = Sunday. */
    washDays: number[];
    kettles: number;
    /** Heat demand of the rooms, W per K below 15.5 °C; counts only in a gas meter that covers it. */
    roomsWPerK: number;
  };
  people: {
    /** Mixed water at 40 °C per head and day, litres. */
    litresAt40PerHead: number;
    /** Chance that a bath is run on a day. */
    bathShare: number;
    /** Chance that a weekend is spent away. */
    awayWeekends: number;
    /** Days away in one summer spell. */
    holidayDays: number;
  };
  cylinder: {
    litres: number;
    /** Standing loss of the whole, W/K, spread over its walls. */
    uaWPerK: number;
    /** Loss of the pipes at the top, W/K, on top of it. */
    pipeWPerK: number;
    /** Height over diameter. */
    slimness: number;
    layers: number;
    /** Conduction up and down, water and wall together, W/(m·K). */
    conductivity: number;
    sensors: { channel: 'tankTop' | 'tankMiddle' | 'tankBottom'; height: number; offsetK: number }[];
  };
  heaters: {
    position: 'lower' | 'upper';
    ratedW: number;
    ratedVolts: number;
    /** Where its heat goes in, shares of the height. */
    low: number;
    high: number;
    thermostatC: number;
    hysteresisK: number;
  }[];
  diverter: { thresholdW: number; targetExportW: number; gain: number; bandW: number } | null;
  /** Wanted boosts from the grid, by the clock. */
  boosts: { start: string; end: string }[];
  boiler: {
    maxW: number;
    flowC: number;
    coilWPerK: number;
    coilHigh: number;
    /** Heat into the cylinder over gross energy of the fuel. */
    efficiency: number;
    /** MJ/m³ gross. */
    calorificMJ: number;
    thermostatC: number;
    hysteresisK: number;
    /** Height of the cylinder thermostat. */
    thermostatHeight: number;
  } | null;
  relay: { windows: { start: string; end: string }[]; targetC: number; hysteresisK: number; sensorHeight: number };
  coldOffsetK: number;
  ambient: { meanC: number; seasonK: number; dayK: number };
  battery: { kwh: number; kw: number } | null;
  meters: {
    exportBy: 'ownMeter' | 'diverterClamp';
    gasCovers: 'hotWater' | 'boiler' | 'house';
    /** Gain error of the diverter's own clamp and meter, share. */
    diverterError: number;
    /** Steps of the electricity figures, W. */
    stepW: number;
    temperatureStep: number;
    temperatureNoise: number;
  };
}

export type Change = { [K in keyof Home]?: Home[K] extends unknown[] | null ? Home[K] : Partial<Home[K]> | Home[K] };

/** An invented home in the English Midlands: 3.9 kWp, 210 litres, one 3 kW heater, a gas boiler as backup. */
export const TYPICAL: Home = {
  seed: 1,
  timeZone: 'Europe/London',
  latitude: 52.4,
  longitude: -1.5,
  clarity: 0,
  panels: [{ kwp: 3.9, tilt: 32, azimuth: 185 }],
  inverterW: 3680,
  exportLimitW: null,
  mainsVolts: 241,
  house: { baseW: 150, occupants: 2.7, peaks: 1, washDays: [0, 3, 6], kettles: 6, roomsWPerK: 160 },
  people: { litresAt40PerHead: 60, bathShare: 0.3, awayWeekends: 0.08, holidayDays: 11 },
  cylinder: {
    litres: 210,
    uaWPerK: 1.6,
    pipeWPerK: 0.2,
    slimness: 2.6,
    layers: 24,
    conductivity: 1.5,
    sensors: [
      { channel: 'tankTop', height: 0.85, offsetK: 0.2 },
      { channel: 'tankBottom', height: 0.22, offsetK: -0.3 },
    ],
  },
  heaters: [
    { position: 'lower', ratedW: 3000, ratedVolts: 240, low: 0.12, high: 0.2, thermostatC: 63, hysteresisK: 5 },
  ],
  diverter: { thresholdW: 100, targetExportW: 40, gain: 0.6, bandW: 25 },
  boosts: [],
  boiler: {
    maxW: 15000,
    flowC: 72,
    coilWPerK: 700,
    coilHigh: 0.38,
    efficiency: 0.74,
    calorificMJ: 39.5,
    thermostatC: 60,
    hysteresisK: 6,
    thermostatHeight: 0.33,
  },
  relay: { windows: [{ start: '16:30', end: '18:30' }], targetC: 58, hysteresisK: 5, sensorHeight: 0.6 },
  coldOffsetK: 0,
  ambient: { meanC: 20, seasonK: 1.5, dayK: 0.8 },
  battery: null,
  meters: {
    exportBy: 'ownMeter',
    gasCovers: 'hotWater',
    diverterError: 0.01,
    stepW: 1,
    temperatureStep: 0.1,
    temperatureNoise: 0.04,
  },
};

/** A home like another, with some things changed (one level deep). */
export function like(home: Home, change: Change): Home {
  const made: Record<string, unknown> = { ...home };
  for (const [key, value] of Object.entries(change)) {
    const old = made[key];
    made[key] =
      value !== null && typeof value === 'object' && !Array.isArray(value) && old !== null && typeof old === 'object'
        ? { ...old, ...value }
        : value;
  }
  return made as unknown as Home;
}
