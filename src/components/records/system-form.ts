import type { DatedSystem, Fuel, System } from '../../../shared/api/property.ts';
import { TANK_CHANNELS, type TankChannel } from '../../../shared/units/channels.ts';
import { FieldReader, type Issue } from './issues.ts';
import { DAYS, type DayOfWeek } from './week.ts';
import { parseClock, parseDate, parseNumber, parseShare, toText, type NumberRule, type Parsed } from './parse.ts';

export interface SensorForm {
  channel: TankChannel;
  fitted: boolean;
  height: string;
}
export interface HeaterForm {
  ratedKw: string;
  ratedVolts: string;
  position: 'lower' | 'upper';
  thermostatC: string;
  viaDiverter: boolean;
}
export interface PanelForm {
  kwp: string;
  tiltDegrees: string;
  azimuthDegrees: string;
}
export interface SpanForm {
  days: DayOfWeek[];
  start: string;
  end: string;
}

/** The system record as text, so that what was typed stays as typed until it is sent. */
export interface SystemForm {
  from: string;
  volumeLitres: string;
  declaredLoss: string;
  insulationKind: '' | 'foam' | 'jacket';
  insulationMm: string;
  sensors: SensorForm[];
  heaters: HeaterForm[];
  fuel: Fuel;
  kind: string;
  efficiency: string;
  efficiencyIs: '' | 'hotWater' | 'nameplate';
  calorificValue: string;
  boilerKw: string;
  panels: PanelForm[];
  exportLimitKw: string;
  battery: '' | 'yes' | 'no';
  charger: '' | 'yes' | 'no';
  phases: '' | '1' | '2' | '3';
  gasMeterCovers: '' | 'hotWater' | 'boiler' | 'house';
  relayMeans: string;
  relayTargetC: string;
  relayWindows: SpanForm[];
  exportLoggedBy: '' | 'ownMeter' | 'diverterClamp' | 'unknown';
  diversionIs: '' | 'metered' | 'estimated';
  diverterSince: string;
  occupants: string;
  floorAreaM2: string;
  hygieneC: string;
  note: string;
}

/** Bounds and units of the number fields, by the end of their path. They mirror the server's; the server has the last word. */
export const RULES = {
  volumeLitres: { min: 20, max: 2000, unit: 'litres', units: ['l', 'litre', 'liter', 'liters'] },
  declaredLoss: { min: 0.01, max: 50, unit: 'kWh a day', units: ['kwh', 'kwh/day', 'kwh/24h', 'kwh/d'] },
  insulationMm: { min: 0, max: 300, unit: 'mm' },
  ratedKw: { min: 0.01, max: 30, unit: 'kW' },
  ratedVolts: { min: 100, max: 480, unit: 'V', units: ['volts', 'volt'] },
  thermostatC: { min: 20, max: 95, unit: '°C', units: ['c', '°', 'degrees'] },
  boilerKw: { min: 0.01, max: 200, unit: 'kW' },
  kwp: { min: 0.01, max: 200, unit: 'kWp', units: ['kw'] },
  tiltDegrees: { min: 0, max: 90, unit: '°', units: ['degrees', 'deg'] },
  exportLimitKw: { min: 0, max: 1000, unit: 'kW' },
  occupants: { min: 0, max: 50, units: ['people', 'persons', 'person'] },
  floorAreaM2: { min: 1, max: 5000, unit: 'm²', units: ['m2', 'sqm'] },
  hygieneC: { min: 45, max: 80, unit: '°C', units: ['c', '°'] },
} satisfies Record<string, NumberRule>;

/** Plausible calorific values, gross. */
export const CALORIFIC: Record<Exclude<Fuel, 'none'>, NumberRule> = {
  gas: { min: 20, max: 60, unit: 'MJ/m³', units: ['mj/m3', 'mj'] },
  lpg: { min: 5, max: 10, unit: 'kWh/litre', units: ['kwh/l', 'kwh'] },
  oil: { min: 8, max: 13, unit: 'kWh/litre', units: ['kwh/l', 'kwh'] },
};

const POINTS = ['n', 'nne', 'ne', 'ene', 'e', 'ese', 'se', 'sse', 's', 'ssw', 'sw', 'wsw', 'w', 'wnw', 'nw', 'nnw'];

/** A direction from north, clockwise: degrees, or a point of the compass (`SSW`, `south-west`). */
export function parseDirection(text: string): Parsed<number> {
  const bare = text
    .trim()
    .toLowerCase()
    .replace(/north/g, 'n')
    .replace(/east/g, 'e')
    .replace(/south/g, 's')
    .replace(/west/g, 'w')
    .replace(/[\s-]/g, '');
  const at = POINTS.indexOf(bare);
  if (at >= 0) return { ok: true, value: at * 22.5 };
  return parseNumber(text, { min: 0, max: 360, unit: '°', units: ['degrees', 'deg'] });
}

/** An empty record: every part of it not yet known. */
export function emptySystemForm(from: string): SystemForm {
  return {
    from,
    volumeLitres: '',
    declaredLoss: '',
    insulationKind: '',
    insulationMm: '',
    sensors: TANK_CHANNELS.map((channel) => ({ channel, fitted: false, height: '' })),
    heaters: [],
    fuel: 'gas',
    kind: '',
    efficiency: '',
    efficiencyIs: '',
    calorificValue: '',
    boilerKw: '',
    panels: [],
    exportLimitKw: '',
    battery: '',
    charger: '',
    phases: '',
    gasMeterCovers: '',
    relayMeans: '',
    relayTargetC: '',
    relayWindows: [],
    exportLoggedBy: '',
    diversionIs: '',
    diverterSince: '',
    occupants: '',
    floorAreaM2: '',
    hygieneC: '',
    note: '',
  };
}

const yesNo = (value: boolean | undefined): '' | 'yes' | 'no' => (value === undefined ? '' : value ? 'yes' : 'no');
const percent = (share: number | undefined): string => (share === undefined ? '' : `${toText(share * 100)} %`);

/** The form that shows a record. */
export function fromSystem(system: DatedSystem): SystemForm {
  const sensors = system.cylinder.sensors ?? [];
  return {
    from: system.from,
    volumeLitres: toText(system.cylinder.volumeLitres),
    declaredLoss: toText(system.cylinder.declaredLossKwhPerDay),
    insulationKind: system.cylinder.insulation?.kind ?? '',
    insulationMm: toText(system.cylinder.insulation?.mm),
    sensors: TANK_CHANNELS.map((channel) => {
      const sensor = sensors.find((one) => one.channel === channel);
      return { channel, fitted: sensor !== undefined, height: percent(sensor?.height) };
    }),
    heaters: (system.heaters ?? []).map((heater) => ({
      ratedKw: toText(heater.ratedKw),
      ratedVolts: toText(heater.ratedVolts),
      position: heater.position,
      thermostatC: toText(heater.thermostatC),
      viaDiverter: heater.viaDiverter,
    })),
    fuel: system.boiler.fuel,
    kind: system.boiler.kind ?? '',
    efficiency: percent(system.boiler.efficiency),
    efficiencyIs: system.boiler.efficiencyIs ?? '',
    calorificValue: toText(system.boiler.calorificValue),
    boilerKw: toText(system.boiler.ratedKw),
    panels: (system.panels ?? []).map((panel) => ({
      kwp: toText(panel.kwp),
      tiltDegrees: toText(panel.tiltDegrees),
      azimuthDegrees: toText(panel.azimuthDegrees),
    })),
    exportLimitKw: toText(system.exportLimitKw),
    battery: yesNo(system.battery),
    charger: yesNo(system.charger),
    phases: system.phases === undefined ? '' : (String(system.phases) as '1' | '2' | '3'),
    gasMeterCovers: system.gasMeterCovers ?? '',
    relayMeans: system.relay?.onMeans ?? '',
    relayTargetC: toText(system.relay?.targetC),
    relayWindows: (system.relay?.windows ?? []).map(({ days, start, end }) => ({
      days: [...(days ?? DAYS)],
      start,
      end,
    })),
    exportLoggedBy: system.exportLoggedBy ?? '',
    diversionIs: system.diversionIs ?? '',
    diverterSince: system.diverterSince ?? '',
    occupants: toText(system.occupants),
    floorAreaM2: toText(system.floorAreaM2),
    hygieneC: toText(system.hygieneC),
    note: system.note ?? '',
  };
}

/** The screen's name for a path of the record, for messages that the server sends. */
export function systemLabel(path: string): string {
  const bare = path.replace(/\.\d+/g, '');
  return LABELS[bare] ?? LABELS[bare.split('.')[0]] ?? path;
}

const LABELS: Record<string, string> = {
  from: 'Holds from',
  'cylinder.volumeLitres': 'Cylinder volume',
  'cylinder.declaredLossKwhPerDay': 'Declared loss',
  'cylinder.insulation': 'Insulation',
  'cylinder.insulation.mm': 'Insulation thickness',
  'cylinder.sensors': 'Sensors',
  'cylinder.sensors.height': 'Sensor height',
  cylinder: 'Cylinder',
  heaters: 'Heater',
  'heaters.ratedKw': 'Heater rating',
  'heaters.ratedVolts': 'Heater voltage',
  'heaters.thermostatC': 'Heater thermostat',
  boiler: 'Boiler',
  'boiler.kind': 'Boiler kind',
  'boiler.efficiency': 'Boiler efficiency',
  'boiler.calorificValue': 'Calorific value',
  'boiler.ratedKw': 'Boiler output',
  panels: 'Panels',
  'panels.kwp': 'Panel power',
  'panels.tiltDegrees': 'Panel tilt',
  'panels.azimuthDegrees': 'Panel direction',
  exportLimitKw: 'Export limit',
  relay: 'Relay',
  'relay.targetC': 'Backup target',
  'relay.windows': 'Backup times',
  'relay.windows.start': 'Backup times',
  'relay.windows.end': 'Backup times',
  diverterSince: 'Diverter since',
  occupants: 'People in the home',
  floorAreaM2: 'Floor area',
  hygieneC: 'Hygiene temperature',
  note: 'Note',
};

/**
 * The record that the form describes.
 * @param form as typed
 * @returns the record, and what is wrong; with any issue the record is not to be sent
 */
export function toSystem(form: SystemForm): { system: DatedSystem; issues: Issue[] } {
  const read = new FieldReader();
  const number = (path: string, text: string, rule: NumberRule): number | undefined =>
    read.optional(path, systemLabel(path), text, (typed) => parseNumber(typed, rule));
  const neededNumber = (path: string, text: string, rule: NumberRule): number =>
    read.required(path, systemLabel(path), text, (typed) => parseNumber(typed, rule), rule.min);

  const from = read.required('from', systemLabel('from'), form.from, parseDate, '1970-01-01');
  const mm = number('cylinder.insulation.mm', form.insulationMm, RULES.insulationMm);
  if (form.insulationKind && form.insulationMm.trim() === '')
    read.say('cylinder.insulation.mm', systemLabel('cylinder.insulation.mm'), 'Say how thick the insulation is.');
  const sensors = form.sensors
    .map((sensor, index) => ({ sensor, path: `cylinder.sensors.${index}.height` }))
    .filter(({ sensor }) => sensor.fitted)
    .map(({ sensor, path }) => ({
      channel: sensor.channel,
      ...given({
        height: read.optional(path, systemLabel('cylinder.sensors.height'), sensor.height, (text) =>
          parseShare(text, 0, 1),
        ),
      }),
    }));
  const relay = {
    ...given({
      onMeans: form.relayMeans.trim() || undefined,
      targetC: number('relay.targetC', form.relayTargetC, RULES.thermostatC),
    }),
    ...(form.relayWindows.length > 0 && {
      windows: form.relayWindows.map((span, index) => ({
        ...(span.days.length < DAYS.length && { days: backupDays(read, index, span) }),
        start: read.required(
          `relay.windows.${index}.start`,
          'Backup times, from',
          span.start,
          (text) => parseClock(text),
          '00:00',
        ),
        end: read.required(
          `relay.windows.${index}.end`,
          'Backup times, to',
          span.end,
          (text) => parseClock(text, true),
          '24:00',
        ),
      })),
    }),
  };
  const system: System = {
    cylinder: {
      volumeLitres: neededNumber('cylinder.volumeLitres', form.volumeLitres, RULES.volumeLitres),
      ...given({
        declaredLossKwhPerDay: number('cylinder.declaredLossKwhPerDay', form.declaredLoss, RULES.declaredLoss),
      }),
      ...(form.insulationKind && mm !== undefined && { insulation: { kind: form.insulationKind, mm } }),
      ...(sensors.length > 0 && { sensors }),
    },
    ...(form.heaters.length > 0 && {
      heaters: form.heaters.map((heater, index) => ({
        ratedKw: neededNumber(`heaters.${index}.ratedKw`, heater.ratedKw, RULES.ratedKw),
        position: heater.position,
        viaDiverter: heater.viaDiverter,
        ...given({
          ratedVolts: number(`heaters.${index}.ratedVolts`, heater.ratedVolts, RULES.ratedVolts),
          thermostatC: number(`heaters.${index}.thermostatC`, heater.thermostatC, RULES.thermostatC),
        }),
      })),
    }),
    boiler:
      form.fuel === 'none'
        ? { fuel: 'none' }
        : {
            fuel: form.fuel,
            ...given({
              kind: form.kind || undefined,
              efficiency: read.optional(
                'boiler.efficiency',
                systemLabel('boiler.efficiency'),
                form.efficiency,
                (text) => parseShare(text, 0.3, 1.1),
              ),
              efficiencyIs: form.efficiency.trim() ? form.efficiencyIs || undefined : undefined,
              calorificValue: number('boiler.calorificValue', form.calorificValue, CALORIFIC[form.fuel]),
              ratedKw: number('boiler.ratedKw', form.boilerKw, RULES.boilerKw),
            }),
          },
    ...(form.panels.length > 0 && {
      panels: form.panels.map((panel, index) => ({
        kwp: neededNumber(`panels.${index}.kwp`, panel.kwp, RULES.kwp),
        ...given({
          tiltDegrees: number(`panels.${index}.tiltDegrees`, panel.tiltDegrees, RULES.tiltDegrees),
          azimuthDegrees: read.optional(
            `panels.${index}.azimuthDegrees`,
            systemLabel('panels.azimuthDegrees'),
            panel.azimuthDegrees,
            parseDirection,
          ),
        }),
      })),
    }),
    ...(Object.keys(relay).length > 0 && { relay }),
    ...given({
      exportLimitKw: number('exportLimitKw', form.exportLimitKw, RULES.exportLimitKw),
      battery: form.battery ? form.battery === 'yes' : undefined,
      charger: form.charger ? form.charger === 'yes' : undefined,
      phases: form.phases ? (Number(form.phases) as 1 | 2 | 3) : undefined,
      gasMeterCovers: form.gasMeterCovers || undefined,
      exportLoggedBy: form.exportLoggedBy || undefined,
      diversionIs: form.diversionIs || undefined,
      diverterSince: read.optional('diverterSince', systemLabel('diverterSince'), form.diverterSince, parseDate),
      occupants: number('occupants', form.occupants, RULES.occupants),
      floorAreaM2: number('floorAreaM2', form.floorAreaM2, RULES.floorAreaM2),
      hygieneC: number('hygieneC', form.hygieneC, RULES.hygieneC),
      note: form.note.trim() || undefined,
    }),
  };
  return { system: { from, ...system }, issues: read.issues };
}

function backupDays(read: FieldReader, index: number, span: SpanForm): DayOfWeek[] {
  if (span.days.length === 0) read.say(`relay.windows.${index}.days`, 'Backup times, days', 'Choose at least one day.');
  return DAYS.filter((day) => span.days.includes(day));
}

/** The entries that are known: an unknown one is left out, never sent as null or 0. */
function given<T extends object>(entries: T): { [K in keyof T]?: Exclude<T[K], undefined> } {
  return Object.fromEntries(Object.entries(entries).filter(([, value]) => value !== undefined)) as {
    [K in keyof T]?: Exclude<T[K], undefined>;
  };
}
