import type { ColumnPlan, PlanColumn } from '../../shared/api/plan.ts';

type Time = ColumnPlan['time'];

const plan = (time: Time, columns: PlanColumn[], more: Partial<ColumnPlan> = {}): ColumnPlan => ({
  encoding: 'utf-8',
  delimiter: ',',
  decimal: '.',
  headerLine: 1,
  time,
  columns,
  ...more,
});
const iso = (column: string, zone: string, stamp: Time['stamp'] = 'instant'): Time => ({
  columns: [column],
  format: 'iso',
  zone,
  stamp,
});
const of = (
  kind: PlanColumn['kind'],
  unit: PlanColumn['unit'],
  column: PlanColumn['column'],
  channel: PlanColumn['channel'],
): PlanColumn => ({ column, channel, kind, unit, sign: 1 });

const registers = plan(iso('timestamp_utc', 'UTC'), [
  of('register', 'kWh', 'import_total_kwh', 'import'),
  of('register', 'kWh', 'export_total_kwh', 'export'),
  of('register', 'kWh', 'diversion_total_kwh', 'diversion'),
  of('register', 'kWh', 'generation_total_kwh', 'generation'),
]);

/** How each sample is to be read, written by hand from its description in samples/README.md. */
export const PLANS: Record<string, ColumnPlan> = {
  'wide-minutes.csv': plan(iso('time', 'Europe/London', 'start'), [
    of('power', 'W', 'export W', 'export'),
    of('power', 'W', 'diversion W', 'diversion'),
    of('level', 'C', 'tank top C', 'tankTop'),
    of('level', 'C', 'tank bottom C', 'tankBottom'),
  ]),
  'registers-utc.csv': registers,
  'register-reset.csv': registers,
  'semicolon-october.csv': plan(
    { columns: ['Zeit'], format: 'dd.MM.yyyy HH:mm', zone: 'Europe/Berlin', stamp: 'start' },
    [
      of('power', 'kW', 'Einspeisung [kW]', 'export'),
      of('power', 'kW', 'Netzbezug [kW]', 'import'),
      of('power', 'kW', 'Heizstab [kW]', 'diversion'),
      of('level', 'C', 'Speicher oben [°C]', 'tankTop'),
    ],
    { encoding: 'windows-1252', delimiter: ';', decimal: ',', headerLine: 4 },
  ),
  'half-hours.csv': plan(iso('period start', 'Europe/London', 'start'), [
    of('energy', 'kWh', 'export kWh', 'export'),
    of('energy', 'kWh', 'import kWh', 'import'),
    of('energy', 'kWh', 'diversion kWh', 'diversion'),
  ]),
  'across-day.csv': plan(
    { columns: ['date'], format: 'yyyy-MM-dd', zone: 'Europe/London', stamp: 'start' },
    [of('energy', 'kWh', 3, 'export')],
    { shape: { kind: 'acrossDay', firstColumn: 3, perDay: 48 } },
  ),
  'long-form.csv': plan(
    iso('time', 'UTC', 'start'),
    [
      of('power', 'W', 'export power', 'export'),
      of('power', 'W', 'diversion power', 'diversion'),
      of('power', 'W', 'generation power', 'generation'),
      of('level', 'C', 'tank top', 'tankTop'),
      of('level', 'C', 'ambient', 'ambient'),
    ],
    { shape: { kind: 'long', nameColumn: 'name', valueColumn: 'value' } },
  ),
  'relay-events.csv': plan(iso('time', 'Europe/London'), [
    { ...of('state', 'state', 'relay', 'relay'), hold: 'toNext', on: ['closed'], off: ['open'] },
  ]),
  'gas-register.csv': plan({ columns: ['epoch'], format: 'epochSeconds', zone: 'UTC', stamp: 'instant' }, [
    of('register', 'm3', 'gas meter m3', 'gas'),
  ]),
  'grid-twelve-hours.csv': plan(
    { columns: ['Date and time'], format: 'dd/MM/yyyy h:mm a', zone: 'Europe/London', stamp: 'start' },
    [of('power', 'kW', 'Grid kW (import +)', 'grid'), of('power', 'kW', 'Immersion heater kW', 'diversion')],
  ),
  'tabs-utf16.csv': plan(
    iso('Time', 'Europe/London'),
    [
      of('level', 'C', 'Tank top °C', 'tankTop'),
      of('level', 'C', 'Tank middle °C', 'tankMiddle'),
      of('level', 'C', 'Tank bottom °C', 'tankBottom'),
      of('level', 'C', 'Ambient °C', 'ambient'),
    ],
    { encoding: 'utf-16le', delimiter: '\t' },
  ),
  'fahrenheit-megajoules.csv': plan(iso('interval end', 'Australia/Hobart', 'end'), [
    of('energy', 'MJ', 'export MJ', 'export'),
    of('energy', 'MJ', 'diversion MJ', 'diversion'),
    of('level', 'F', 'tank top F', 'tankTop'),
  ]),
  'dead-clamp.csv': plan(iso('time', 'UTC', 'start'), [
    of('power', 'W', 'export W', 'export'),
    of('power', 'W', 'import W', 'import'),
    of('power', 'W', 'diversion W', 'diversion'),
    of('level', 'C', 'tank top C', 'tankTop'),
  ]),
  'fault-values.csv': plan(iso('time', 'UTC', 'start'), [
    of('power', 'W', 'diversion W', 'diversion'),
    of('level', 'C', 'tank top C', 'tankTop'),
    of('level', 'C', 'tank bottom C', 'tankBottom'),
  ]),
};
