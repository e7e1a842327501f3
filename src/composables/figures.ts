import { FIGURE_CHANNELS } from './figure-channels.ts';
import type { Day, FigureName } from '../../shared/api/day.ts';
import type { Property } from '../../shared/api/property.ts';
import type { Channel } from '../../shared/units/channels.ts';
import { number, said } from './format.ts';

/** What a person is told of a figure when they ask for its working. */
export interface FigureEntry {
  label: string;
  /** What it is, in a sentence. */
  means: string;
  /** How it is worked out, with the numbers put in; null where one of them is not known. */
  working: (day: Day, context: FigureContext) => string | null;
}

/** What the workings need besides the day. */
export interface FigureContext {
  currency: string | null;
  /** Fuel of the boiler, for its name in the words. */
  property: Property | null;
}

type Work = FigureEntry['working'];
const none: Work = () => null;
const kwh = (value: number): string => said('exportKwh', value, null);

/** A working that needs all of these figures. */
function needs<K extends FigureName>(
  names: readonly K[],
  write: (values: Record<K, number>, day: Day, context: FigureContext) => string | null,
): Work {
  return (day, context) => {
    const values = {} as Record<K, number>;
    for (const name of names) {
      const value = day[name] as number | null;
      if (value === null) return null;
      values[name] = value;
    }
    return write(values, day, context);
  };
}

const EFFICIENCY = needs(['usefulHeatKwh', 'gasDisplacedKwh'], (v) =>
  v.gasDisplacedKwh === 0
    ? `useful heat ${kwh(v.usefulHeatKwh)} gives 0 kWh`
    : `useful heat ${kwh(v.usefulHeatKwh)} ÷ efficiency for hot water ${number(v.usefulHeatKwh / v.gasDisplacedKwh, 2)} = ${kwh(v.gasDisplacedKwh)}`,
);

/** Every figure with its name, its meaning and its working. */
export const FIGURE_BOOK: Record<FigureName, FigureEntry> = {
  exportKwh: { label: 'Exported', means: 'What left for the grid.', working: none },
  importKwh: { label: 'Imported', means: 'What was bought from the grid.', working: none },
  generationKwh: { label: 'Generated', means: 'What the panels made.', working: none },
  heaterKwh: { label: 'Heater', means: 'All energy metered into the immersion heater.', working: none },
  boughtHeatKwh: {
    label: 'Bought heat',
    means: 'The part of the heater’s energy that no surplus made.',
    working: needs(
      ['heaterKwh', 'divertedKwh', 'boughtHeatKwh'],
      (v) => `heater ${kwh(v.heaterKwh)} − diverted ${kwh(v.divertedKwh)} = ${kwh(v.boughtHeatKwh)}`,
    ),
  },
  divertedKwh: {
    label: 'Diverted',
    means: 'Surplus that went into the cylinder instead of to the grid.',
    working: needs(
      ['heaterKwh', 'boughtHeatKwh', 'divertedKwh'],
      (v) => `heater ${kwh(v.heaterKwh)} − bought heat ${kwh(v.boughtHeatKwh)} = ${kwh(v.divertedKwh)}`,
    ),
  },
  surplusCaught: {
    label: 'Surplus caught',
    means: 'The share of the surplus that went into the cylinder.',
    working: needs(
      ['divertedKwh', 'exportKwh', 'surplusCaught'],
      (v) =>
        `diverted ${kwh(v.divertedKwh)} ÷ (diverted ${kwh(v.divertedKwh)} + exported ${kwh(v.exportKwh)}) = ${said('surplusCaught', v.surplusCaught, null)}`,
    ),
  },
  usefulHeatKwh: {
    label: 'Useful heat',
    means: 'What the diverted energy was worth at the taps; a hotter store loses more.',
    working: needs(['divertedKwh', 'usefulHeatKwh'], (v) =>
      v.divertedKwh === 0
        ? null
        : `diverted ${kwh(v.divertedKwh)} × ${number(v.usefulHeatKwh / v.divertedKwh, 2)} for the hotter store = ${kwh(v.usefulHeatKwh)}`,
    ),
  },
  fuelHeatKwh: { label: 'Heat from fuel', means: 'What the boiler put into the cylinder.', working: none },
  drawHeatKwh: { label: 'Drawn off', means: 'Heat that left through the taps.', working: none },
  standingLossKwh: { label: 'Standing loss', means: 'Heat lost through the cylinder’s wall.', working: none },
  storeChangeKwh: {
    label: 'Change of store',
    means: 'Heat in the cylinder at the end, less that at the beginning.',
    working: none,
  },
  residualKwh: {
    label: 'Left unexplained',
    means: 'What keeps the energy book from closing.',
    working: needs(
      ['heaterKwh', 'fuelHeatKwh', 'drawHeatKwh', 'standingLossKwh', 'storeChangeKwh', 'residualKwh'],
      (v) =>
        `heater ${kwh(v.heaterKwh)} + fuel ${kwh(v.fuelHeatKwh)} − drawn off ${kwh(v.drawHeatKwh)} − loss ${kwh(v.standingLossKwh)} − change of store ${kwh(v.storeChangeKwh)} = ${kwh(v.residualKwh)}`,
    ),
  },
  solarFraction: {
    label: 'Solar fraction',
    means: 'The sun’s share of the heat put into the cylinder.',
    working: needs(
      ['divertedKwh', 'heaterKwh', 'fuelHeatKwh', 'solarFraction'],
      (v) =>
        `diverted ${kwh(v.divertedKwh)} ÷ (heater ${kwh(v.heaterKwh)} + fuel ${kwh(v.fuelHeatKwh)}) = ${said('solarFraction', v.solarFraction, null)}`,
    ),
  },
  litresAt40: {
    label: 'Water at 40 °C',
    means: 'How much water at the tap, mixed to 40 °C, the useful heat warms.',
    working: needs(['usefulHeatKwh', 'litresAt40'], (v) =>
      v.litresAt40 === 0
        ? null
        : `useful heat ${kwh(v.usefulHeatKwh)} ÷ (0.001163 kWh per litre and kelvin × ${number(v.usefulHeatKwh / (0.001163 * v.litresAt40), 1)} K from the cold feed to 40 °C) = ${said('litresAt40', v.litresAt40, null)}`,
    ),
  },
  gasDisplacedKwh: {
    label: 'Fuel displaced',
    means: 'Boiler fuel that was not burnt because diverted power heated the water, gross.',
    working: EFFICIENCY,
  },
  gasDisplacedM3: {
    label: 'Gas displaced',
    means: 'The same as volume on the gas meter.',
    working: needs(['gasDisplacedKwh', 'gasDisplacedM3'], (v) =>
      v.gasDisplacedM3 === 0
        ? null
        : `fuel displaced ${kwh(v.gasDisplacedKwh)} × 3.6 ÷ (1.02264 × ${number((v.gasDisplacedKwh * 3.6) / (1.02264 * v.gasDisplacedM3), 1)} MJ/m³) = ${said('gasDisplacedM3', v.gasDisplacedM3, null)}`,
    ),
  },
  fuelDisplacedLitres: {
    label: 'Fuel displaced',
    means: 'The same in litres of fuel.',
    working: needs(['gasDisplacedKwh', 'fuelDisplacedLitres'], (v) =>
      v.fuelDisplacedLitres === 0
        ? null
        : `fuel displaced ${kwh(v.gasDisplacedKwh)} ÷ ${number(v.gasDisplacedKwh / v.fuelDisplacedLitres, 2)} kWh per litre = ${said('fuelDisplacedLitres', v.fuelDisplacedLitres, null)}`,
    ),
  },
  fuelMeasuredKwh: { label: 'Fuel by the meter', means: 'What the fuel meter recorded, gross.', working: none },
  fuelMeasuredM3: { label: 'Gas by the meter', means: 'What the gas meter recorded.', working: none },
  netSaving: {
    label: 'Worth, net',
    means: 'Fuel not bought, less the export payment given up, less heat bought.',
    working: (day, { currency }) => {
      const { fuel, export: exported, bought } = day.savingTerms;
      if (fuel === null || exported === null || bought === null || day.netSaving === null) return null;
      const amount = (value: number): string => said('netSaving', value, currency);
      return `fuel not bought ${amount(fuel)} − export given up ${amount(-exported)} − bought heat ${amount(-bought)} = ${amount(day.netSaving)}`;
    },
  },
  co2SavedKg: {
    label: 'Carbon dioxide saved',
    means: 'What the unburnt fuel would have given off, less what the surplus would have saved in the grid.',
    working: (day) => {
      const { fuel, grid } = day.co2Terms;
      if (fuel === null || grid === null || day.co2SavedKg === null) return null;
      const amount = (value: number): string => said('co2SavedKg', value, null);
      return `fuel ${amount(fuel)} − grid ${amount(grid)} = ${amount(day.co2SavedKg)}`;
    },
  },
  missedSunKwh: {
    label: 'Missed sun',
    means: 'Surplus that the heater could have taken that day had the backup waited.',
    working: none,
  },
  missedSunValue: {
    label: 'Missed sun, worth',
    means: 'What the missed sun would have been worth, net.',
    working: none,
  },
};

/** The channels of a figure that were logged, with their coverage. */
export function coverageOf(figure: FigureName, day: Day): { channel: Channel; share: number }[] {
  return FIGURE_CHANNELS[figure].flatMap((channel) => {
    const share = day.coverage[channel];
    return share === undefined ? [] : [{ channel, share }];
  });
}
