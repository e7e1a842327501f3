import type { Day, DaysAnswer } from '../../shared/api/day.ts';
import { deriveDays } from '../../shared/energy/derive.ts';
import type { Home } from '../../shared/energy/home.ts';
import { totalOf } from '../../shared/energy/totals.ts';
import { civilDay, civilRange } from '../../shared/time/civil.ts';
import type { Database } from '../database/connection.ts';
import { badFields, problem } from '../http/problems.ts';
import { workDone } from '../jobs/work.ts';
import { homeOf } from '../properties/properties.service.ts';
import { daysBetween } from './days.repository.ts';

const MOST_DAYS = 4000;
/** How long an answer waits for figures to follow a change that was made before it was asked for. */
const PATIENCE_MS = 20_000;

/**
 * The days of a property, one for each date from `from` to `to`, both included, with their total. Changes that were
 * acknowledged before are waited for.
 * @throws Problem 422 if `to` lies before `from`, or too far after it
 */
export async function readDays(db: Database, propertyId: string, from: string, to: string): Promise<DaysAnswer> {
  const count = civilDay(to) - civilDay(from) + 1;
  if (count < 1) throw badFields([{ path: 'to', message: 'this day lies before “from”' }]);
  if (count > MOST_DAYS)
    throw badFields([{ path: 'to', message: `${count} days are asked for; ${MOST_DAYS} are given at once` }]);
  await workDone(db, propertyId, PATIENCE_MS);
  const home = await homeOf(db, propertyId);
  if (!home) throw problem('not-found');
  const stored = new Map((await daysBetween(db, propertyId, from, to)).map((day) => [day.date, day]));
  const dates = civilRange(from, to);
  const empty = new Map(
    emptyDays(
      home,
      dates.filter((date) => !stored.has(date)),
    ).map((day) => [day.date, day]),
  );
  const days = dates.map((date) => stored.get(date) ?? empty.get(date)!);
  const currency = currencyOn(home, to);
  return { timeZone: home.timeZone, currency, days, totals: totalOf(days, currency) };
}

/** Days without readings: nothing is known, and it is said why. */
function emptyDays(home: Home, dates: readonly string[]): Day[] {
  return deriveDays({ traces: { traces: new Map(), told: [], beyondKwh: new Map() }, dates, home });
}

/** The currency of the tariff in force on a date; the first one also holds before its own. */
function currencyOn({ tariffs }: Home, date: string): string | null {
  return (tariffs.findLast((tariff) => (tariff.from ?? '') <= date) ?? tariffs[0])?.currency ?? null;
}
