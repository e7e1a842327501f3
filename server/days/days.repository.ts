import type { Day, FigureName } from '../../shared/api/day.ts';
import { FIGURES } from '../../shared/api/day.ts';
import { civilDay } from '../../shared/time/civil.ts';
import type { Scope, Tx } from '../database/connection.ts';
import { CopyWriter } from '../database/copy.ts';

/** The columns of the figures. */
export const FIGURE_COLUMN: Record<FigureName, string> = {
  exportKwh: 'export_kwh',
  importKwh: 'import_kwh',
  generationKwh: 'generation_kwh',
  heaterKwh: 'heater_kwh',
  boughtHeatKwh: 'bought_heat_kwh',
  divertedKwh: 'diverted_kwh',
  surplusCaught: 'surplus_caught',
  usefulHeatKwh: 'useful_heat_kwh',
  fuelHeatKwh: 'fuel_heat_kwh',
  drawHeatKwh: 'draw_heat_kwh',
  standingLossKwh: 'standing_loss_kwh',
  storeChangeKwh: 'store_change_kwh',
  residualKwh: 'residual_kwh',
  solarFraction: 'solar_fraction',
  litresAt40: 'litres_at_40',
  gasDisplacedKwh: 'gas_displaced_kwh',
  gasDisplacedM3: 'gas_displaced_m3',
  fuelDisplacedLitres: 'fuel_displaced_litres',
  fuelMeasuredKwh: 'fuel_measured_kwh',
  fuelMeasuredM3: 'fuel_measured_m3',
  netSaving: 'net_saving',
  co2SavedKg: 'co2_saved_kg',
  missedSunKwh: 'missed_sun_kwh',
  missedSunValue: 'missed_sun_value',
};

type Figures = Record<FigureName, number | null>;

/** Days between two civil dates, both included, in order; dates without readings are not there. */
export async function daysBetween(scope: Scope, propertyId: string, from: string, to: string): Promise<Day[]> {
  const figures = FIGURES.map((name) => `d.${FIGURE_COLUMN[name]} as "${name}"`).join(', ');
  const rows = await scope.query<
    { date: string; hours: number; complete: boolean; detail: Omit<Day, FigureName | 'date'> } & Figures
  >(
    `select d.day as date, d.hours, d.complete, ${figures}, x.detail
     from days d join day_details x on x.property_id = d.property_id and x.day = d.day
     where d.property_id = $1 and d.day between $2 and $3 order by d.day`,
    [propertyId, from, to],
  );
  return rows.map(({ detail, ...day }) => ({ ...day, ...detail }));
}

/** Takes away the days between two civil dates, both included. */
export async function deleteDays(tx: Tx, propertyId: string, from: string, to: string): Promise<void> {
  for (const table of ['days', 'day_details'])
    await tx.query(`delete from ${table} where property_id = $1 and day between $2 and $3`, [propertyId, from, to]);
}

/** Writes days; none of them may be there. */
export async function copyDays(tx: Tx, propertyId: string, days: readonly Day[]): Promise<void> {
  const narrow = new CopyWriter(tx, 'days', [
    ['property_id', 'text'],
    ['day', 'date'],
    ['hours', 'float8'],
    ['complete', 'bool'],
    ...FIGURES.map((name) => [FIGURE_COLUMN[name], 'float8'] as const),
  ]);
  for (const day of days)
    await narrow.row([propertyId, civilDay(day.date), day.hours, day.complete, ...FIGURES.map((name) => day[name])]);
  await narrow.end();
  const details = new CopyWriter(tx, 'day_details', [
    ['property_id', 'text'],
    ['day', 'date'],
    ['detail', 'jsonb'],
  ]);
  for (const day of days) {
    const { coverage, spreadKwh, savingTerms, co2Terms, tank, rests, ranges, reasons, notes } = day;
    const detail = { coverage, spreadKwh, savingTerms, co2Terms, tank, rests, ranges, reasons, notes };
    await details.row([propertyId, civilDay(day.date), JSON.stringify(detail)]);
  }
  await details.end();
}

/** First and last day with readings. */
export async function spanOfDays(scope: Scope, propertyId: string) {
  const [row] = await scope.query<{ first: string | null; last: string | null }>(
    'select min(day) as first, max(day) as last from days where property_id = $1',
    [propertyId],
  );
  return { first: row?.first ?? null, last: row?.last ?? null };
}
