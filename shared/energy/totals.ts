import type { Day, FigureName, Rests, Totals } from '../api/day.ts';
import { FIGURES } from '../api/day.ts';
import { CHANNELS, type Channel } from '../units/channels.ts';
import { NO_TANK } from './derive.ts';

/** Shares are worked out again from what they are shares of, never added. */
const SHARES: ReadonlySet<FigureName> = new Set(['surplusCaught', 'solarFraction']);

/** Metered figures to which register steps over six hours add in a total. */
const SPREAD: Partial<Record<FigureName, readonly Channel[]>> = {
  exportKwh: ['export'],
  importKwh: ['import'],
  generationKwh: ['generation'],
  heaterKwh: ['diversion', 'diversion2'],
  divertedKwh: ['diversion', 'diversion2'],
};

const RANK: Record<Rests, number> = { measured: 0, workedOut: 1, assumed: 2 };

/**
 * Adds days up. A sum is `null` where no day has the figure; shares come from complete days only; a figure rests on the
 * weakest of its days.
 *
 * @param days in order, one for each date
 * @param currency of the money figures
 */
export function totalOf(days: readonly Day[], currency: string | null): Totals {
  const figures = {} as Record<FigureName, number | null>;
  const rests: Record<string, Rests> = {};
  const ranges: Record<string, [number, number]> = {};
  const reasons: Record<string, string> = {};
  for (const name of FIGURES) {
    if (SHARES.has(name)) continue;
    const known = days.filter((day) => day[name] !== null);
    const spread = add((SPREAD[name] ?? []).flatMap((channel) => days.map((day) => day.spreadKwh[channel] ?? null)));
    const sum = add(known.map((day) => day[name]));
    figures[name] = sum === null && spread === null ? null : round((sum ?? 0) + (spread ?? 0));
    if (figures[name] === null) reasons[name] = commonReason(days, name);
    const weakest = known
      .map((day) => day.rests[name])
      .filter((rest) => rest !== undefined)
      .sort((a, b) => RANK[b] - RANK[a])[0];
    if (weakest) rests[name] = weakest;
    if (known.some((day) => day.ranges[name]))
      ranges[name] = [0, 1].map((end) =>
        round(known.reduce((total, day) => total + (day.ranges[name]?.[end] ?? day[name] ?? 0), 0)),
      ) as [number, number];
  }
  const complete = days.filter((day) => day.complete);
  figures.surplusCaught = share(complete, 'surplusCaught', 'divertedKwh', 'exportKwh');
  figures.solarFraction = share(complete, 'solarFraction', 'divertedKwh', null);
  for (const name of SHARES) {
    if (figures[name] === null) reasons[name] = complete.length ? commonReason(complete, name) : 'no day is complete';
    else rests[name] = 'workedOut';
  }
  const hours = days.reduce((sum, day) => sum + day.hours, 0);
  const ready = days.map((day) => day.tank.readyMet).filter((met) => met !== null);
  return {
    date: days[0]?.date ?? '',
    to: days[days.length - 1]?.date ?? '',
    days: days.length,
    completeDays: complete.length,
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

/** A share over days: its parts are taken back from each day's share and diverted energy. */
function share(days: readonly Day[], name: FigureName, part: FigureName, rest: FigureName | null): number | null {
  let whole = 0;
  let sum = 0;
  for (const day of days) {
    const own = day[name];
    const diverted = day[part];
    if (diverted === null || own === null) {
      if (!rest || diverted === null || day[rest] === null) continue;
    }
    sum += diverted;
    whole += own ? diverted / own : diverted + (rest ? (day[rest] ?? 0) : 0);
  }
  return whole > 0 ? round(sum / whole) : null;
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
