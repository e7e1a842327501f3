import type { FigureName } from '../../shared/api/day.ts';
import type { Channel } from '../../shared/units/channels.ts';

const HEATER = ['diversion', 'diversion2'] as const;
const SUN = [...HEATER, 'import'] as const;
const TANK = ['tankTop', 'tankMiddle', 'tankBottom'] as const;
const BOOK = [...HEATER, ...TANK, 'relay', 'gas', 'ambient'] as const;

/** Which channels each figure looks at, where they are logged. */
export const FIGURE_CHANNELS: Record<FigureName, readonly Channel[]> = {
  exportKwh: ['export'],
  importKwh: ['import'],
  generationKwh: ['generation'],
  heaterKwh: HEATER,
  boughtHeatKwh: SUN,
  divertedKwh: SUN,
  surplusCaught: [...SUN, 'export'],
  usefulHeatKwh: SUN,
  fuelHeatKwh: BOOK,
  drawHeatKwh: BOOK,
  standingLossKwh: [...TANK, 'ambient'],
  storeChangeKwh: TANK,
  residualKwh: BOOK,
  solarFraction: [...SUN, ...TANK, 'relay', 'gas'],
  litresAt40: [...SUN, 'coldFeed'],
  gasDisplacedKwh: SUN,
  gasDisplacedM3: SUN,
  fuelDisplacedLitres: SUN,
  fuelMeasuredKwh: ['gas'],
  fuelMeasuredM3: ['gas'],
  netSaving: SUN,
  co2SavedKg: SUN,
  missedSunKwh: [...SUN, 'export', ...TANK],
  missedSunValue: [...SUN, 'export', ...TANK],
};

/** What a channel is called in a sentence or a heading. */
export const CHANNEL_LABELS: Record<Channel, string> = {
  grid: 'Grid',
  export: 'Export',
  import: 'Import',
  generation: 'Generation',
  diversion: 'Diversion',
  diversion2: 'Diversion, second heater',
  tankTop: 'Tank, top',
  tankMiddle: 'Tank, middle',
  tankBottom: 'Tank, bottom',
  relay: 'Relay',
  gas: 'Fuel meter',
  coldFeed: 'Cold feed',
  ambient: 'Air around',
  battery: 'Battery',
  charger: 'Car charger',
};
