/** One measured quantity at a property. The order is the order of display. */
export const CHANNELS = [
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
  'charger',
] as const;
export type Channel = (typeof CHANNELS)[number];

/** What a column's numbers are. */
export const KINDS = ['power', 'energy', 'register', 'level', 'state'] as const;
export type Kind = (typeof KINDS)[number];

export const UNITS = ['W', 'kW', 'Wh', 'kWh', 'MWh', 'MJ', 'm3', 'litre', 'ft3', 'ft3x100', 'C', 'F', 'state'] as const;
export type Unit = (typeof UNITS)[number];

/** The physical quantity of a channel, which bounds the kinds and units a column of it may have. */
export type Quantity = 'electricity' | 'fuel' | 'temperature' | 'state';

export const QUANTITY: Record<Channel, Quantity> = {
  grid: 'electricity',
  export: 'electricity',
  import: 'electricity',
  generation: 'electricity',
  diversion: 'electricity',
  diversion2: 'electricity',
  tankTop: 'temperature',
  tankMiddle: 'temperature',
  tankBottom: 'temperature',
  relay: 'state',
  gas: 'fuel',
  coldFeed: 'temperature',
  ambient: 'temperature',
  battery: 'electricity',
  charger: 'electricity',
};

export const TANK_CHANNELS = ['tankTop', 'tankMiddle', 'tankBottom'] as const satisfies readonly Channel[];
export type TankChannel = (typeof TANK_CHANNELS)[number];

/** Channels that may be negative by nature: grid (positive = import) and battery (positive = charging). */
export const SIGNED_CHANNELS: ReadonlySet<Channel> = new Set(['grid', 'battery']);

/** Kinds and units that make sense together for a quantity; anything else is refused with a message. */
export const ALLOWED: Record<Quantity, { kinds: readonly Kind[]; units: Record<Kind, readonly Unit[]> }> = {
  electricity: {
    kinds: ['power', 'energy', 'register'],
    units: {
      power: ['W', 'kW'],
      energy: ['Wh', 'kWh', 'MWh', 'MJ'],
      register: ['Wh', 'kWh', 'MWh', 'MJ'],
      level: [],
      state: [],
    },
  },
  fuel: {
    kinds: ['power', 'energy', 'register'],
    units: {
      power: ['W', 'kW'],
      energy: ['Wh', 'kWh', 'MWh', 'MJ', 'm3', 'litre', 'ft3', 'ft3x100'],
      register: ['Wh', 'kWh', 'MWh', 'MJ', 'm3', 'litre', 'ft3', 'ft3x100'],
      level: [],
      state: [],
    },
  },
  temperature: {
    kinds: ['level'],
    units: { power: [], energy: [], register: [], level: ['C', 'F'], state: [] },
  },
  state: {
    kinds: ['state'],
    units: { power: [], energy: [], register: [], level: [], state: ['state'] },
  },
};
