import { setImmediate as turn } from 'node:timers/promises';
import type { Day } from '../../shared/api/day.ts';
import { deriveDays } from '../../shared/energy/derive.ts';
import type { Home } from '../../shared/energy/home.ts';
import { effectiveTraces } from '../../shared/energy/trace.ts';
import { civilDay, civilOfDay, civilRange } from '../../shared/time/civil.ts';
import { DAY_MS, zoneOf } from '../../shared/time/zone.ts';
import type { Tx } from '../database/connection.ts';
import { homeOf, setDaySpan } from '../properties/properties.service.ts';
import { daySpan, layersAround, reachesOf, REGISTER_REACH_DAYS } from '../readings/readings.service.ts';
import type { BlocksAtHand, LogReach } from '../readings/readings.service.ts';
import { copyDays, deleteDays, spanOfDays } from './days.repository.ts';

/** A calendar month of a property's zone, the unit in which days are derived. */
interface Month {
  /** First and last civil date. */
  from: string;
  to: string;
  /** UTC days that hold its first and last instant. */
  utc: { from: number; to: number };
}

/**
 * Derives days anew after readings changed, in the transaction that changed them. Days are derived by whole calendar
 * months from what is stored around each, so that they do not depend on the order in which logs came.
 *
 * @param changed the UTC days on which layers changed
 * @param extra the reach of logs that are no longer there
 * @param atHand blocks that need not be read back
 */
export async function deriveChanged(
  tx: Tx,
  propertyId: string,
  changed: readonly number[],
  { atHand, extra = [] }: { atHand?: BlocksAtHand; extra?: readonly LogReach[] } = {},
): Promise<void> {
  if (changed.length === 0) return;
  const home = await homeOf(tx, propertyId);
  if (!home) throw new Error(`There is no property ${propertyId}.`);
  const reaches = await reachesOf(tx, propertyId);
  const reach = [...reaches, ...extra].reduce(
    (most, { reachDays, registers }) => Math.max(most, registers ? REGISTER_REACH_DAYS : reachDays),
    0,
  );
  await deriveMonths(tx, propertyId, home, monthsAround(home, changed, reach), reaches, atHand);
}

/** Derives all days of a property anew, after a record of it changed. */
export async function deriveAll(tx: Tx, propertyId: string): Promise<void> {
  const home = await homeOf(tx, propertyId);
  if (!home) return;
  const span = await daySpan(tx, propertyId);
  const reaches = await reachesOf(tx, propertyId);
  // Another zone has other days: none of the old ones stays.
  await deleteDays(tx, propertyId, '1900-01-01', '2199-12-31');
  const months = span ? monthsBetween(home, span.first - REGISTER_REACH_DAYS, span.last + REGISTER_REACH_DAYS) : [];
  await deriveMonths(tx, propertyId, home, months, reaches);
}

async function deriveMonths(
  tx: Tx,
  propertyId: string,
  home: Home,
  months: readonly Month[],
  reaches: readonly LogReach[],
  atHand?: BlocksAtHand,
): Promise<void> {
  let days: Day[] = [];
  let run = null as { from: string; to: string } | null;
  const write = async () => {
    if (run) await deleteDays(tx, propertyId, run.from, run.to);
    if (days.length) await copyDays(tx, propertyId, days);
    days = [];
    run = null;
  };
  for (const month of months) {
    // Months that follow each other are written together.
    if (run && civilDay(month.from) !== civilDay(run.to) + 1) await write();
    run = { from: run?.from ?? month.from, to: month.to };
    const layers = await layersAround(tx, propertyId, month.utc, reaches, { atHand });
    if (layers.length) days.push(...daysOf(home, month, layers));
    if (days.length > 400) await write();
    await turn();
  }
  await write();
  const { first, last } = await spanOfDays(tx, propertyId);
  await setDaySpan(tx, propertyId, first, last);
}

function daysOf(home: Home, { from, to }: Month, layers: Parameters<typeof effectiveTraces>[0]): Day[] {
  const traces = effectiveTraces(layers);
  return deriveDays({ traces, dates: civilRange(from, to), home }).filter(hasReadings);
}

/** A day without any reading is not stored: it is made when it is asked for. */
function hasReadings({ coverage, spreadKwh }: Day): boolean {
  return Object.keys(coverage).length > 0 || Object.keys(spreadKwh).length > 0;
}

/** The months on which layers of these UTC days can weigh, in order. */
function monthsAround(home: Home, utcDays: readonly number[], reach: number): Month[] {
  const months = new Map<string, Month>();
  for (const day of new Set(utcDays))
    for (const month of monthsBetween(home, day - reach, day + reach, months)) months.set(month.from, month);
  return [...months.values()].sort((a, b) => (a.from < b.from ? -1 : 1));
}

/** The months that hold any instant of the UTC days from `from` to `to`. */
function monthsBetween(home: Home, from: number, to: number, known?: ReadonlyMap<string, Month>): Month[] {
  const zone = zoneOf(home.timeZone);
  const last = zone.civilOf((to + 1) * DAY_MS - 1);
  const months: Month[] = [];
  let first = `${zone.civilOf(from * DAY_MS).slice(0, 7)}-01`;
  while (first <= last) {
    const next = `${civilOfDay(civilDay(first) + 31).slice(0, 7)}-01`;
    const end = civilOfDay(civilDay(next) - 1);
    months.push(
      known?.get(first) ?? {
        from: first,
        to: end,
        utc: {
          from: Math.floor(zone.dayBounds(first).start / DAY_MS),
          to: Math.floor((zone.dayBounds(end).end - 1) / DAY_MS),
        },
      },
    );
    first = next;
  }
  return months;
}
