import { z } from 'zod';
import { fixedOffset, isZone } from '../time/zone.ts';
import { CHANNELS, TANK_CHANNELS } from '../units/channels.ts';
import { boilerKind } from '../energy/boilers.ts';
import { CivilDate, ClockTime, ClockTimeEnd } from './common.ts';

const share = z.number().min(0).max(1);
const positive = z.number().positive();

export const FUELS = ['gas', 'lpg', 'oil', 'none'] as const;
export type Fuel = (typeof FUELS)[number];

export const DAYS_OF_WEEK = ['mon', 'tue', 'wed', 'thu', 'fri', 'sat', 'sun'] as const;
const DaysOfWeek = z.array(z.enum(DAYS_OF_WEEK)).min(1).max(7);

/** Plausible calorific values by fuel: MJ/m³ for gas, kWh/litre for LPG and oil. */
const CALORIFIC_RANGE: Record<Fuel, readonly [number, number]> = {
  gas: [20, 60],
  lpg: [5, 10],
  oil: [8, 13],
  none: [0, 60],
};

const Boiler = z
  .strictObject({
    fuel: z.enum(FUELS),
    kind: z.string().max(60).optional().meta({ description: 'An id from /api/reference/boiler-kinds' }),
    efficiency: z
      .number()
      .min(0.3, 'a share of 0.3 to 1.1, not a percentage')
      .max(1.1, 'a share of 0.3 to 1.1, not a percentage')
      .optional()
      .meta({ description: 'Gross, as a share' }),
    efficiencyIs: z.enum(['hotWater', 'nameplate']).optional(),
    calorificValue: positive.max(60).optional().meta({ description: 'MJ/m³ for gas, kWh/litre for LPG and oil' }),
    ratedKw: positive.max(200).optional(),
  })
  .check(({ value, issues }) => {
    const { fuel, kind, calorificValue } = value;
    if (kind !== undefined && !boilerKind(kind, fuel))
      issues.push({
        code: 'custom',
        input: kind,
        path: ['kind'],
        message: `no kind of boiler for ${fuel} is called “${kind}”; /api/reference/boiler-kinds lists them`,
      });
    const [least, most] = CALORIFIC_RANGE[fuel];
    if (calorificValue !== undefined && (calorificValue < least || calorificValue > most))
      issues.push({
        code: 'custom',
        input: calorificValue,
        path: ['calorificValue'],
        message: `for ${fuel} between ${least} and ${most} ${fuel === 'gas' ? 'MJ/m³' : 'kWh/litre'}`,
      });
  });

export const System = z
  .strictObject({
    cylinder: z.strictObject({
      volumeLitres: z.number().min(20).max(2000),
      declaredLossKwhPerDay: positive.max(50).optional(),
      insulation: z.strictObject({ kind: z.enum(['foam', 'jacket']), mm: z.number().min(0).max(300) }).optional(),
      sensors: z
        .array(z.strictObject({ channel: z.enum(TANK_CHANNELS), height: share.optional() }))
        .max(3)
        .optional(),
    }),
    heaters: z
      .array(
        z.strictObject({
          ratedKw: positive.max(30),
          ratedVolts: z.number().min(100).max(480).optional(),
          position: z.enum(['lower', 'upper']),
          thermostatC: z.number().min(20).max(95).optional(),
          viaDiverter: z.boolean(),
        }),
      )
      .max(4)
      .optional(),
    boiler: Boiler,
    panels: z
      .array(
        z.strictObject({
          kwp: positive.max(200),
          tiltDegrees: z.number().min(0).max(90).optional(),
          azimuthDegrees: z.number().min(0).max(360).optional(),
        }),
      )
      .max(8)
      .optional(),
    exportLimitKw: z.number().min(0).max(1000).optional(),
    battery: z.boolean().optional(),
    charger: z.boolean().optional(),
    phases: z.union([z.literal(1), z.literal(2), z.literal(3)]).optional(),
    gasMeterCovers: z.enum(['hotWater', 'boiler', 'house']).optional(),
    relay: z
      .strictObject({
        onMeans: z.string().max(200).optional(),
        windows: z
          .array(z.strictObject({ days: DaysOfWeek.optional(), start: ClockTime, end: ClockTimeEnd }))
          .max(12)
          .optional(),
        targetC: z.number().min(20).max(95).optional(),
      })
      .optional(),
    exportLoggedBy: z.enum(['ownMeter', 'diverterClamp', 'unknown']).optional(),
    diversionIs: z.enum(['metered', 'estimated']).optional(),
    diverterSince: CivilDate.optional(),
    occupants: z.number().min(0).max(50).optional(),
    floorAreaM2: positive.max(5000).optional(),
    hygieneC: z.number().min(45).max(80).optional(),
    note: z.string().max(2000).optional(),
  })
  .meta({ id: 'System' });
export type System = z.infer<typeof System>;

const price = z.number().min(-100).max(100000);

export const Tariff = z
  .strictObject({
    currency: z.string().regex(/^[A-Z]{3}$/, 'a currency code of three letters, such as GBP'),
    fuelPerKwh: price,
    importPerKwh: price,
    exportPerKwh: price,
    exportPayment: z.enum(['metered', 'deemed', 'none']).optional(),
    windows: z
      .array(
        z.strictObject({
          days: DaysOfWeek,
          start: ClockTime,
          end: ClockTimeEnd,
          clock: z.enum(['civil', 'standard']),
          importPerKwh: price.optional(),
          exportPerKwh: price.optional(),
        }),
      )
      .max(24)
      .optional(),
  })
  .meta({ id: 'Tariff' });
export type Tariff = z.infer<typeof Tariff>;

export const DatedSystem = System.extend({ from: CivilDate }).meta({ id: 'DatedSystem' });
export const DatedTariff = Tariff.extend({ from: CivilDate.optional() }).meta({ id: 'DatedTariff' });
export type DatedSystem = z.infer<typeof DatedSystem>;
export type DatedTariff = z.infer<typeof DatedTariff>;

export const Ready = z
  .strictObject({ time: ClockTime, temperatureC: z.number().min(30).max(75) })
  .meta({ id: 'Ready' });
export type Ready = z.infer<typeof Ready>;

const TimeZone = z
  .string()
  .max(64)
  .refine(
    (name) => isZone(name) && (name === 'UTC' || fixedOffset(name) === null),
    'a time zone by its IANA name, such as Europe/London',
  )
  .meta({ description: 'IANA name' });
const Country = z
  .string()
  .regex(/^[A-Z]{2}$/, 'a country code of two letters, such as GB')
  .meta({ description: 'ISO 3166, two letters' });

export const PropertyName = z.string().trim().min(1).max(120);

export const NewProperty = z
  .strictObject({
    name: PropertyName,
    timeZone: TimeZone,
    country: Country.optional(),
    latitude: z.number().min(-90).max(90).optional(),
    longitude: z.number().min(-180).max(180).optional(),
    ready: Ready.partial().optional(),
    system: System.extend({ from: CivilDate.optional() }),
    tariff: DatedTariff.optional(),
    teamId: z.string().optional(),
  })
  .meta({ id: 'NewProperty' });
export type NewProperty = z.infer<typeof NewProperty>;

export const PropertyPatch = z
  .strictObject({
    name: PropertyName,
    timeZone: TimeZone,
    country: Country.nullable(),
    latitude: z.number().min(-90).max(90).nullable(),
    longitude: z.number().min(-180).max(180).nullable(),
    ready: z
      .strictObject({ time: ClockTime.nullable(), temperatureC: Ready.shape.temperatureC.nullable() })
      .partial()
      .meta({ description: 'null takes the default again' }),
  })
  .partial()
  .meta({ id: 'PropertyPatch' });
export type PropertyPatch = z.infer<typeof PropertyPatch>;

export const ROLES = ['occupier', 'installer', 'landlord'] as const;
export type Role = (typeof ROLES)[number];

/** One default that was taken, with where it comes from. */
export const Default = z
  .object({
    path: z.string().meta({ description: 'Which entry, such as boiler.efficiency' }),
    label: z.string(),
    value: z.union([z.number(), z.string(), z.boolean(), z.null()]),
    unit: z.string().nullable(),
    source: z.string().meta({ description: 'A published source, or “common practice, no source”' }),
  })
  .meta({ id: 'Default' });
export type Default = z.infer<typeof Default>;

export const PropertySummary = z
  .object({
    id: z.string(),
    name: z.string(),
    timeZone: z.string(),
    country: z.string().nullable(),
    role: z.enum(ROLES).meta({ description: 'The caller’s role at this property' }),
    firstDay: CivilDate.nullable(),
    lastDay: CivilDate.nullable(),
    volumeLitres: z.number(),
    demo: z.boolean(),
  })
  .meta({ id: 'PropertySummary' });
export type PropertySummary = z.infer<typeof PropertySummary>;

export const PropertyList = z.object({ properties: z.array(PropertySummary) }).meta({ id: 'PropertyList' });
export type PropertyList = z.infer<typeof PropertyList>;

export const Property = PropertySummary.extend({
  latitude: z.number().nullable(),
  longitude: z.number().nullable(),
  ready: Ready,
  system: DatedSystem,
  tariff: DatedTariff.nullable(),
  systems: z.array(DatedSystem).meta({ description: 'Every system record, oldest first' }),
  tariffs: z.array(DatedTariff).meta({ description: 'Every tariff, oldest first' }),
  defaults: z.array(Default),
  teamId: z.string(),
  mayEdit: z.boolean(),
  mayUpload: z.boolean(),
  maySeeTraces: z.boolean(),
  mayGrant: z.boolean(),
  mayConsent: z.boolean(),
  tracesConsent: z.boolean().meta({ description: 'Whether the occupier lets landlords see anything finer than a day' }),
}).meta({ id: 'Property' });
export type Property = z.infer<typeof Property>;

export const BoilerKinds = z
  .object({
    kinds: z.array(
      z.object({
        id: z.string(),
        label: z.string(),
        fuels: z.array(z.enum(FUELS)),
        winter: share,
        summer: share,
        source: z.string(),
      }),
    ),
  })
  .meta({ id: 'BoilerKinds' });
export type BoilerKinds = z.infer<typeof BoilerKinds>;

export const ChannelName = z.enum(CHANNELS);
