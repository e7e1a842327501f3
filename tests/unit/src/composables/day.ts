import type { Day, FigureName, Totals } from '../../../../shared/api/day.ts';
import { FIGURES } from '../../../../shared/api/day.ts';

/** A day on which nothing is known, with what a test says of it. */
export function day(date: string, over: Partial<Day> = {}): Day {
  return {
    date,
    hours: 24,
    complete: true,
    coverage: { diversion: 1 },
    spreadKwh: {},
    ...(Object.fromEntries(FIGURES.map((name) => [name, null])) as Record<FigureName, null>),
    savingTerms: { fuel: null, export: null, bought: null },
    co2Terms: { fuel: null, grid: null },
    tank: {
      sensor: null,
      minC: null,
      maxC: null,
      atReadyC: null,
      readyMet: null,
      hygieneHours: null,
      longestHygieneHours: null,
    },
    rests: {},
    ranges: {},
    reasons: {},
    ...over,
  };
}

export function totals(days: readonly Day[], over: Partial<Totals> = {}): Totals {
  return {
    ...day(days[0].date),
    to: days[days.length - 1].date,
    days: days.length,
    completeDays: days.filter((one) => one.complete).length,
    currency: 'GBP',
    readyEvenings: { met: 0, known: 0 },
    ...over,
  };
}
