import { z } from 'zod';
import { CHANNELS, TANK_CHANNELS } from '../units/channels.ts';
import { CivilDate, ClockTime, ClockTimeEnd } from './common.ts';

const share = z.number().min(0).max(1);
const positive = z.number().positive();

export const FUELS = ['gas', 'lpg', 'oil', 'none'] as const;
export type Fuel = (typeof FUELS)[number];

export const System = z
  .object({
    cylinder: z.object({
      volumeLitres: z.number().min(20).max(2000),
      declaredLossKwhPerDay: positive.max(50).optional(),
      insulation: z.object({ kind: z.enum(['foam', 'jacket']), mm: z.number().min(0).max(300) }).optional(),
      sensors: z
        .array(z.object({ channel: z.enum(TANK_CHANNELS), height: share.optional() }))
        .max(3)
        .optional(),
    }),
    heaters: z
      .array(
        z.object({
          ratedKw: positive.max(30),
          ratedVolts: z.number().min(100).max(480).optional(),
          position: z.enum(['lower', 'upper']),
          thermostatC: z.number().min(20).max(95).optional(),
          viaDiverter: z.boolean(),
        }),
      )
      .max(4)
      .optional(),
    boiler: z.object({
      fuel: z.enum(FUELS),
      kind: z.string().max(60).optional().meta({ description: 'An id from /api/reference/boiler-kinds' }),
      efficiency: z.number().min(0.3).max(1.1).optional().meta({ description: 'Gross, as a share' }),
      efficiencyIs: z.enum(['hotWater', 'nameplate']).optional(),
      calorificValue: positive.max(60).optional().meta({ description: 'MJ/m³ for gas, kWh/litre for LPG and oil' }),
      ratedKw: positive.max(200).optional(),
    }),
    panels: z
      .array(
        z.object({
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
      .object({
        onMeans: z.string().max(200).optional(),
        windows: z
          .array(z.object({ start: ClockTime, end: ClockTimeEnd }))
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

export const DAYS_OF_WEEK = ['mon', 'tue', 'wed', 'thu', 'fri', 'sat', 'sun'] as const;
const price = z.number().min(-100).max(100000);

export const Tariff = z
  .object({
    currency: z.string().regex(/^[A-Z]{3}$/, 'a currency code of three letters, such as GBP'),
    fuelPerKwh: price,
    importPerKwh: price,
    exportPerKwh: price,
    exportPayment: z.enum(['metered', 'deemed', 'none']).optional(),
    windows: z
      .array(
        z.object({
          days: z.array(z.enum(DAYS_OF_WEEK)).min(1).max(7),
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

export const Ready = z.object({ time: ClockTime, temperatureC: z.number().min(30).max(75) }).meta({ id: 'Ready' });
export type Ready = z.infer<typeof Ready>;

export const PropertyName = z.string().trim().min(1).max(120);

export const NewProperty = z
  .object({
    name: PropertyName,
    timeZone: z.string().max(64).meta({ description: 'IANA name' }),
    country: z
      .string()
      .regex(/^[A-Z]{2}$/, 'a country code of two letters, such as GB')
      .optional(),
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
  .object({
    name: PropertyName,
    timeZone: z.string().max(64),
    country: z
      .string()
      .regex(/^[A-Z]{2}$/, 'a country code of two letters, such as GB')
      .nullable(),
    latitude: z.number().min(-90).max(90).nullable(),
    longitude: z.number().min(-180).max(180).nullable(),
    ready: Ready,
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

export const ChannelName = z.enum(CHANNELS);
