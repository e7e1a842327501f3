import { z } from 'zod';
import { CHANNELS, TANK_CHANNELS } from '../units/channels.ts';
import { CivilDate } from './common.ts';

const figure = z.number().nullable();
const kwh = figure.meta({ description: 'kWh' });

/** Every figure of a day, in the order of the energy book. */
export const FIGURES = [
  'exportKwh',
  'importKwh',
  'generationKwh',
  'heaterKwh',
  'boughtHeatKwh',
  'divertedKwh',
  'surplusCaught',
  'usefulHeatKwh',
  'fuelHeatKwh',
  'drawHeatKwh',
  'standingLossKwh',
  'storeChangeKwh',
  'residualKwh',
  'solarFraction',
  'litresAt40',
  'gasDisplacedKwh',
  'gasDisplacedM3',
  'fuelDisplacedLitres',
  'fuelMeasuredKwh',
  'fuelMeasuredM3',
  'netSaving',
  'co2SavedKg',
  'missedSunKwh',
  'missedSunValue',
] as const;
export type FigureName = (typeof FIGURES)[number];

export const RESTS = ['measured', 'workedOut', 'assumed'] as const;
export type Rests = (typeof RESTS)[number];

export const Tank = z.object({
  sensor: z.enum(TANK_CHANNELS).nullable(),
  minC: figure,
  maxC: figure,
  atReadyC: figure,
  readyMet: z.boolean().nullable(),
  hygieneHours: figure,
  longestHygieneHours: figure,
});
export type Tank = z.infer<typeof Tank>;

const FigureFields = z.object(
  Object.fromEntries(FIGURES.map((name) => [name, name.endsWith('Kwh') ? kwh : figure])) as Record<
    FigureName,
    typeof figure
  >,
);

export const Day = z
  .object({
    date: CivilDate,
    hours: z.number(),
    complete: z.boolean(),
    coverage: z.partialRecord(z.enum(CHANNELS), z.number().min(0).max(1)),
    spreadKwh: z.partialRecord(z.enum(CHANNELS), z.number()),
    ...FigureFields.shape,
    savingTerms: z.object({ fuel: figure, export: figure, bought: figure }),
    co2Terms: z.object({ fuel: figure, grid: figure }),
    tank: Tank,
    rests: z.partialRecord(z.string(), z.enum(RESTS)),
    ranges: z.record(z.string(), z.tuple([z.number(), z.number()])),
    reasons: z.record(z.string(), z.string()),
    notes: z.array(z.string()).optional().meta({ description: 'What was told while reducing this day' }),
  })
  .meta({ id: 'Day' });
export type Day = z.infer<typeof Day>;

/** The sum over days: `date` is the first day; it says how many days were complete, by figure. */
export const Totals = Day.extend({
  to: CivilDate,
  days: z.int(),
  completeDays: z.int(),
  completeDaysBy: z.partialRecord(z.enum(FIGURES), z.int()).optional(),
  currency: z.string().nullable(),
  readyEvenings: z.object({ met: z.int(), known: z.int() }),
}).meta({ id: 'Totals' });
export type Totals = z.infer<typeof Totals>;

export const DaysAnswer = z
  .object({ timeZone: z.string(), currency: z.string().nullable(), days: z.array(Day), totals: Totals })
  .meta({ id: 'DaysAnswer' });
export type DaysAnswer = z.infer<typeof DaysAnswer>;

export const DaysQuery = z.object({ from: CivilDate, to: CivilDate });

export const ReadingsQuery = z.object({
  channel: z.enum(CHANNELS),
  from: z.iso.datetime({ offset: true }),
  to: z.iso.datetime({ offset: true }),
  points: z.coerce.number().int().min(2).max(20000).optional(),
  as: z.literal('read').optional(),
});
export const ReadingsAnswer = z
  .object({
    channel: z.enum(CHANNELS),
    unit: z.string(),
    points: z.array(z.tuple([z.number(), z.number().nullable()])),
  })
  .meta({ id: 'ReadingsAnswer' });
export type ReadingsAnswer = z.infer<typeof ReadingsAnswer>;

export const CylinderAnswer = z
  .object({
    uaWPerK: figure,
    uaRange: z.tuple([z.number(), z.number()]).nullable(),
    nights: z.int(),
    declaredUaWPerK: figure,
    f: z.number(),
    fRange: z.tuple([z.number(), z.number()]),
  })
  .meta({ id: 'CylinderAnswer' });
export type CylinderAnswer = z.infer<typeof CylinderAnswer>;
