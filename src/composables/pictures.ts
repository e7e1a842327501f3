import type { Day, FigureName, Totals } from '../../shared/api/day.ts';
import type { Meaning } from '../styles/tokens.ts';
import { counted, money, percent, said, shown } from './format.ts';
import { FIGURE_BOOK } from './figures.ts';

/** One way of looking at days, months or years; its id stands in the address. */
export interface Picture {
  id: string;
  label: string;
  unit: (currency: string | null) => string;
  series: readonly PictureSeries[];
  /** The figures of the table beside it. */
  figures: readonly FigureName[];
}

interface PictureSeries {
  name: string;
  meaning: Meaning | 'ink';
  hatch: 'plain' | 'diagonal' | 'across' | 'dots';
  stack?: string;
  value: (day: Day | Totals) => number | null;
  figure: FigureName;
}

const of = (
  figure: FigureName,
  meaning: Meaning | 'ink',
  hatch: PictureSeries['hatch'],
  stack?: string,
): PictureSeries => ({
  name: FIGURE_BOOK[figure].label,
  meaning,
  hatch,
  stack,
  figure,
  value: (day) => day[figure],
});

const share = (figure: FigureName, meaning: Meaning, hatch: PictureSeries['hatch']): PictureSeries => ({
  ...of(figure, meaning, hatch),
  value: (day) => (day[figure] === null ? null : day[figure] * 100),
});

export const PICTURES: readonly Picture[] = [
  {
    id: 'heat',
    label: 'Heat: sun and fuel',
    unit: () => 'kWh',
    series: [of('divertedKwh', 'sun', 'plain', 'heat'), of('fuelHeatKwh', 'fuel', 'diagonal', 'heat')],
    figures: ['divertedKwh', 'fuelHeatKwh', 'boughtHeatKwh', 'solarFraction', 'litresAt40'],
  },
  {
    id: 'surplus',
    label: 'Surplus: diverted and exported',
    unit: () => 'kWh',
    series: [of('divertedKwh', 'sun', 'plain', 'surplus'), of('exportKwh', 'exported', 'across', 'surplus')],
    figures: ['divertedKwh', 'exportKwh', 'surplusCaught', 'missedSunKwh'],
  },
  {
    id: 'money',
    label: 'Worth, net',
    unit: (currency) => currency ?? '',
    series: [of('netSaving', 'water', 'plain')],
    figures: ['netSaving', 'gasDisplacedKwh', 'boughtHeatKwh', 'divertedKwh'],
  },
  {
    id: 'fuel',
    label: 'Fuel displaced',
    unit: () => 'kWh',
    series: [of('gasDisplacedKwh', 'fuel', 'diagonal')],
    figures: ['gasDisplacedKwh', 'gasDisplacedM3', 'fuelMeasuredKwh', 'usefulHeatKwh'],
  },
  {
    id: 'carbon',
    label: 'Carbon dioxide',
    unit: () => 'kg',
    series: [of('co2SavedKg', 'water', 'dots')],
    figures: ['co2SavedKg', 'gasDisplacedKwh', 'divertedKwh'],
  },
  {
    id: 'share',
    label: 'Solar fraction',
    unit: () => '%',
    series: [share('solarFraction', 'sun', 'plain')],
    figures: ['solarFraction', 'divertedKwh', 'fuelHeatKwh', 'surplusCaught'],
  },
  {
    id: 'grid',
    label: 'Grid: imported and exported',
    unit: () => 'kWh',
    series: [of('importKwh', 'ink', 'diagonal'), of('exportKwh', 'exported', 'across')],
    figures: ['importKwh', 'exportKwh', 'generationKwh'],
  },
  {
    id: 'tank',
    label: 'Tank at ready time',
    unit: () => '°C',
    series: [
      {
        name: 'Tank at ready time',
        meaning: 'tank',
        hatch: 'plain',
        figure: 'storeChangeKwh',
        value: (day) => day.tank.atReadyC,
      },
    ],
    figures: ['standingLossKwh', 'drawHeatKwh', 'fuelHeatKwh'],
  },
];

export const pictureOf = (id: unknown): Picture => PICTURES.find((one) => one.id === id) ?? PICTURES[0];

/** A value of a picture’s series, as read out. */
export function pictureText(picture: Picture, value: number | null, currency: string | null): string {
  if (value === null) return 'not known';
  if (picture.id === 'money') return money(value, currency);
  if (picture.id === 'share') return percent(value / 100);
  const { value: text } = shown('exportKwh', value, null);
  return `${text}\u00a0${picture.unit(currency)}`;
}

/** What a picture shows of a stretch of time, in a sentence. */
export function pictureSentence(picture: Picture, totals: Totals, when: string, currency: string | null): string {
  const { divertedKwh, fuelHeatKwh, exportKwh, surplusCaught, importKwh } = totals;
  const unknown = `${picture.label}: not known ${when}`;
  const text = (figure: FigureName): string => said(figure, totals[figure], currency);
  switch (picture.id) {
    case 'heat':
      if (divertedKwh === null) return unknown;
      return fuelHeatKwh === null
        ? `The sun put ${text('divertedKwh')} into the cylinder ${when}`
        : `The sun put in ${text('divertedKwh')} ${when}, fuel ${text('fuelHeatKwh')}`;
    case 'surplus':
      if (divertedKwh === null || exportKwh === null) return unknown;
      return surplusCaught === null
        ? `${text('divertedKwh')} diverted and ${text('exportKwh')} exported ${when}`
        : `The cylinder caught ${text('surplusCaught')} of the surplus ${when}`;
    case 'money':
      return totals.netSaving === null ? unknown : `Worth ${text('netSaving')} net ${when}`;
    case 'fuel':
      return totals.gasDisplacedKwh === null ? unknown : `${text('gasDisplacedKwh')} of fuel not burnt ${when}`;
    case 'carbon':
      return totals.co2SavedKg === null ? unknown : `${text('co2SavedKg')} of carbon dioxide saved ${when}`;
    case 'share':
      return totals.solarFraction === null ? unknown : `The sun made ${text('solarFraction')} of the hot water ${when}`;
    case 'grid':
      if (importKwh === null && exportKwh === null) return unknown;
      return `Imported ${text('importKwh')}, exported ${text('exportKwh')} ${when}`;
    case 'tank': {
      const { met, known } = totals.readyEvenings;
      return known === 0 ? unknown : `Ready on ${met} of the ${counted(known, 'evening')} known ${when}`;
    }
    default:
      return unknown;
  }
}

/** On how much the numbers rest, for the line beneath a picture. */
export function completeWords(totals: Totals): string {
  const { completeDays, days } = totals;
  if (completeDays === days) return `All ${counted(days, 'day')} are complete.`;
  return `${completeDays} of ${counted(days, 'day')} are complete; what was not logged is a gap and counts as not known.`;
}
