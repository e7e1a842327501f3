import type { Day, FigureName, Rests, Totals } from '../api/day.ts';
import { FIGURES } from '../api/day.ts';
import { CHANNELS, type Channel } from '../units/channels.ts';
import { completeFor } from './complete.ts';
import { NO_TANK } from './derive.ts';

/** Shares are worked out again from what they are shares of, never added. */
const SHARES: ReadonlySet<FigureName> = new Set(['surplusCaught', 'solarFraction']);

/** Metered figures to which register steps over six hours add in a total. */
const SPREAD: Partial<Record<FigureName, readonly Channel[]>> = {
  exportKwh: ['export'],
  importKwh: ['import'],
  generationKwh: ['generation'],
  heaterKwh: ['diversion', 'diversion2'],
  fuelMeasuredKwh: ['gas'],
};

const RANK: Record<Rests, number> = { measured: 0, workedOut: 1, assumed: 2 };

function weakest(days: readonly Day[], name: FigureName): Rests | undefined {
  return days
    .map((day) => day.rests[name])
    .filter((rest) => rest !== undefined)
    .sort((a, b) => RANK[b] - RANK[a])[0];
}

export interface TotalsContext {
  /** Of the money figures. */
  currency: string | null;
  /** Register steps of more than 31 days that end in these days, kWh by channel: they add to the total of the whole. */
  beyondKwh?: ReadonlyMap<Channel, number>;
}

/**
 * Adds days up. A sum is `null` where no day has the figure; shares come from complete days only; a figure rests on the
 * weakest of its days.
 *
 * @param days in order, one for each date
 * @param context the currency, or more
 */
export function totalOf(days: readonly Day[], context: TotalsContext | string | null): Totals {
  const { currency, beyondKwh }: TotalsContext =
    context === null || typeof context === 'string' ? { currency: context } : context;
  const figures = {} as Record<FigureName, number | null>;
  const rests: Record<string, Rests> = {};
  const ranges: Record<string, [number, number]> = {};
  const reasons: Record<string, string> = {};
  for (const name of FIGURES) {
    if (SHARES.has(name)) continue;
    const known = days.filter((day) => day[name] !== null);
    const spread = add(
      (SPREAD[name] ?? []).flatMap((channel) => [
        ...days.map((day) => day.spreadKwh[channel] ?? null),
        beyondKwh?.get(channel) ?? null,
      ]),
    );
    const sum = add(known.map((day) => day[name]));
    figures[name] = sum === null && spread === null ? null : round((sum ?? 0) + (spread ?? 0));
    if (figures[name] === null) reasons[name] = commonReason(days, name);
    const least = weakest(known, name);
    if (least) rests[name] = least;
    if (known.some((day) => day.ranges[name]))
      ranges[name] = [0, 1].map((end) =>
        round(known.reduce((total, day) => total + (day.ranges[name]?.[end] ?? day[name] ?? 0), 0)),
      ) as [number, number];
  }
  const complete = days.filter((day) => day.complete);
  const caught = days.filter((day) => completeFor(day, 'surplusCaught') && day.divertedKwh !== null);
  const solar = days.filter((day) => completeFor(day, 'solarFraction') && day.solarFraction !== null);
  const diverted = (list: readonly Day[]) => add(list.map((day) => day.divertedKwh));
  figures.surplusCaught = share(diverted(caught), add(caught.flatMap((day) => [day.divertedKwh, day.exportKwh])));
  figures.solarFraction = share(diverted(solar), add(solar.flatMap((day) => [day.heaterKwh, day.fuelHeatKwh])));
  for (const [name, list] of [
    ['surplusCaught', caught],
    ['solarFraction', solar],
  ] as const) {
    if (figures[name] === null) reasons[name] = list.length ? commonReason(list, name) : 'no day is complete';
    else rests[name] = weakest(list, name) ?? 'workedOut';
  }
  const hours = days.reduce((sum, day) => sum + day.hours, 0);
  const ready = days.map((day) => day.tank.readyMet).filter((met) => met !== null);
  return {
    date: days[0]?.date ?? '',
    to: days[days.length - 1]?.date ?? '',
    days: days.length,
    completeDays: complete.length,
    completeDaysBy: Object.fromEntries(
      FIGURES.map((name) => [name, days.filter((day) => completeFor(day, name)).length]),
    ),
    hours,
    complete: complete.length === days.length && days.length > 0,
    currency,
    coverage: byChannel((channel) => {
      const covered = add(days.map((day) => scale(day.coverage[channel], day.hours)));
      return covered === null ? null : round(covered / hours);
    }),
    spreadKwh: byChannel((channel) => add(days.map((day) => day.spreadKwh[channel] ?? null))),
    ...figures,
    savingTerms: {
      fuel: add(days.map((day) => day.savingTerms.fuel)),
      export: add(days.map((day) => day.savingTerms.export)),
      bought: add(days.map((day) => day.savingTerms.bought)),
    },
    co2Terms: { fuel: add(days.map((day) => day.co2Terms.fuel)), grid: add(days.map((day) => day.co2Terms.grid)) },
    tank: tankOf(days),
    rests,
    ranges,
    reasons,
    readyEvenings: { met: ready.filter(Boolean).length, known: ready.length },
  };
}

const round = (value: number) => Number(value.toFixed(6));
const scale = (value: number | undefined, by: number) => (value === undefined ? null : value * by);

function add(values: readonly (number | null)[]): number | null {
  const known = values.filter((value) => value !== null);
  return known.length ? round(known.reduce((sum, value) => sum + value, 0)) : null;
}

function share(part: number | null, whole: number | null): number | null {
  return part === null || whole === null || whole <= 0 ? null : round(part / whole);
}

function commonReason(days: readonly Day[], name: FigureName): string {
  const counts = new Map<string, number>();
  for (const day of days) {
    const reason = day.reasons[name];
    if (reason) counts.set(reason, (counts.get(reason) ?? 0) + 1);
  }
  return [...counts].sort((a, b) => b[1] - a[1])[0]?.[0] ?? 'no day has this figure';
}

function byChannel(of: (channel: Channel) => number | null): Partial<Record<Channel, number>> {
  return Object.fromEntries(
    CHANNELS.map((c) => [c, of(c)] as const).filter((e): e is [Channel, number] => e[1] !== null),
  );
}

function tankOf(days: readonly Day[]): Totals['tank'] {
  const tanks = days.map((day) => day.tank).filter((tank) => tank.sensor !== null);
  const last = tanks[tanks.length - 1];
  if (!last) return NO_TANK;
  const known = (values: (number | null)[]) => values.filter((v) => v !== null);
  const longest = known(tanks.map((t) => t.longestHygieneHours));
  return {
    sensor: last.sensor,
    minC: Math.min(...known(tanks.map((t) => t.minC))),
    maxC: Math.max(...known(tanks.map((t) => t.maxC))),
    atReadyC: null,
    readyMet: null,
    hygieneHours: add(tanks.map((t) => t.hygieneHours)),
    longestHygieneHours: longest.length ? Math.max(...longest) : null,
  };
}
