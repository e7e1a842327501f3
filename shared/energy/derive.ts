import type { Day, FigureName, Rests, Tank } from '../api/day.ts';
import { FIGURES } from '../api/day.ts';
import type { DatedSystem, DatedTariff } from '../api/property.ts';
import { civilDay, DAY_MS, type Zone, zoneOf } from '../time/zone.ts';
import { CHANNELS, type Channel } from '../units/channels.ts';
import { gasKwh, gasM3 } from '../units/convert.ts';
import { carbonFactors } from './carbon.ts';
import { COMPLETE } from './complete.ts';
import { darkness, union } from './darkness.ts';
import { DEFAULTS } from './defaults.ts';
import { calorificValue, hotWaterEfficiency } from './fuel.ts';
import type { Home } from './home.ts';
import { type Bought, type Flows, flowsOf, inWh } from './flows.ts';
import { type Cleaned, coveredBy, type Stretches, withoutNegatives } from './negatives.ts';
import { Cursor, integrate, leastOf, type Sum } from './sums.ts';
import { tankOfDay, tankSensor } from './tank.ts';
import { inForce, type PriceStep, priceSteps } from './tariff.ts';
import type { TraceSet } from './trace.ts';
import { coldFeedC, litresAt40 } from './water.ts';

const HOUR_MS = 3_600_000;

export interface DeriveInput {
  traces: TraceSet;
  /** Civil dates, ascending; the traces must reach over all of them. */
  dates: readonly string[];
  home: Home;
}

/**
 * Reduces traces to the days of a property's zone: every figure that its channels allow, `null` with a reason for the
 * others, and for each whether it is measured, worked out or assumed. Definitions: DEVELOPERS.md, glossary.
 *
 * @returns one Day for each date, in order
 */
export function deriveDays({ traces, dates, home }: DeriveInput): Day[] {
  const zone = zoneOf(home.timeZone);
  const cursors = new Map<Channel, Cursor>();
  const cleaned = new Map<Channel, Cleaned>();
  for (const [channel, trace] of traces.traces) {
    if (!NOT_NEGATIVE.has(channel)) {
      cursors.set(channel, new Cursor(trace));
      continue;
    }
    const clean = withoutNegatives(trace);
    cursors.set(channel, new Cursor(clean.trace));
    cleaned.set(channel, clean);
  }
  return dates.map((date) => new DayBook(date, zone, home, cursors, cleaned).day());
}

const NOT_NEGATIVE: ReadonlySet<Channel> = new Set([
  'export',
  'import',
  'generation',
  'diversion',
  'diversion2',
  'gas',
]);

/** Rounds to so many decimals, without a negative zero. */
const round = (value: number, digits = 6) => Math.round(value * 10 ** digits) / 10 ** digits + 0;

/** Longest step at which import and heater can be set against each other by instant, seconds. */
const FINE_SECONDS = 300;

/** Works out one day; each method fills in the figures that its name says. */
class DayBook {
  private readonly from: number;
  private readonly to: number;
  private readonly system: DatedSystem;
  private readonly tariff: DatedTariff | null;
  private readonly figures = {} as Record<FigureName, number | null>;
  private readonly rests: Record<string, Rests> = {};
  private readonly ranges: Record<string, [number, number]> = {};
  private readonly reasons: Record<string, string> = {};
  private readonly coverage: Partial<Record<Channel, number>> = {};
  private readonly spread: Partial<Record<Channel, number>> = {};
  private readonly sums = new Map<Channel, Sum>();
  private readonly told: string[] = [];

  constructor(
    private readonly date: string,
    private readonly zone: Zone,
    private readonly home: Home,
    private readonly cursors: ReadonlyMap<Channel, Cursor>,
    cleaned: ReadonlyMap<Channel, Cleaned>,
  ) {
    const { start, end } = zone.dayBounds(date);
    this.from = start;
    this.to = end;
    this.system = inForce(home.systems, date) as DatedSystem;
    this.tariff = inForce(home.tariffs, date);
    for (const name of FIGURES) this.figures[name] = null;
    for (const channel of CHANNELS) {
      const cursor = cursors.get(channel);
      // What a signed channel says stands under its two sides.
      if (!cursor || channel === 'grid') continue;
      const sum = integrate(cursor, this.from, this.to);
      if (sum.spread) this.spread[channel] = round(this.inKwh(channel, sum.spread) ?? 0);
      if (!sum.any) continue;
      this.sums.set(channel, sum);
      this.coverage[channel] = Math.min(1, round(sum.coveredMs / (this.to - this.from)));
    }
    for (const [channel, { zeroed, unknown }] of cleaned) {
      if (coveredBy(unknown, this.from, this.to))
        this.told.push(`${channel}: negative values beyond a meter’s idle jitter leave their time unknown`);
      if (coveredBy(zeroed, this.from, this.to)) this.told.push(`${channel}: small negative values count as zero`);
    }
  }

  day(): Day {
    this.metered('exportKwh', 'export');
    this.metered('importKwh', 'import');
    this.metered('generationKwh', 'generation');
    const heat = this.heat();
    const useful = heat && this.usefulHeat(heat);
    this.fuelMeasured();
    const displaced = useful === null ? null : this.displaced(useful);
    const saving = heat && useful !== null ? this.saving(heat, useful, displaced) : NO_SAVING;
    if (!heat) for (const name of OF_DIVERSION) this.unknown(name, NO_DIVERSION);
    const carbon = this.carbon(heat, displaced);
    for (const name of OF_BALANCE) this.unknown(name, NO_BALANCE);
    return {
      date: this.date,
      hours: round((this.to - this.from) / HOUR_MS, 4),
      complete: this.complete(),
      coverage: this.coverage,
      spreadKwh: this.spread,
      ...this.figures,
      savingTerms: saving,
      co2Terms: carbon,
      tank: this.tank(),
      rests: this.rests,
      ranges: this.ranges,
      reasons: this.reasons,
      ...(this.told.length ? { notes: this.told } : {}),
    };
  }

  private set(name: FigureName, value: number, rests: Rests): number {
    this.figures[name] = round(value);
    this.rests[name] = rests;
    return value;
  }

  private unknown(name: FigureName, reason: string): null {
    this.figures[name] = null;
    this.reasons[name] ??= reason;
    return null;
  }

  private complete(): boolean {
    const shares = Object.values(this.coverage);
    return shares.length > 0 && shares.every((share) => share >= COMPLETE);
  }

  private metered(name: FigureName, channel: Channel): void {
    const sum = this.sums.get(channel);
    if (!sum) this.unknown(name, `no ${channel} readings on this day`);
    else this.set(name, sum.total / 1000, sum.assumedMs > 0 ? 'assumed' : 'measured');
  }

  /** Energy of a trace's sum in kWh; `null` where a volume's calorific value is not known. */
  private inKwh(channel: Channel, sum: number): number | null {
    if (!this.cursors.get(channel)?.trace.volumetric) return sum / 1000;
    const cv = calorificValue(this.system.boiler);
    if (cv === null) return null;
    return this.system.boiler.fuel === 'gas' ? gasKwh(sum, cv) : sum * 1000 * cv;
  }

  /** Heater energy and how much of it was bought: by instant against import, else by the dark and the cheap hours. */
  private heat(): Heat | null {
    const logged = HEATERS.filter((channel) => this.sums.has(channel));
    if (!logged.length) return null;
    const heaters = logged.map((channel) => this.cursors.get(channel) as Cursor);
    const metered = this.system.diversionIs === 'estimated' ? 'assumed' : 'measured';
    const steps = this.tariff ? priceSteps(this.tariff, this.zone, this.from, this.to) : [];
    const instants = steps.length ? steps.map(({ at }) => at) : [this.from];
    const total =
      heaters.length > 1
        ? heatOf(this.walk(heaters, { dark: [] }, undefined, [this.from]))
        : (this.sums.get(logged[0]) as Sum).total;
    if (total === null) {
      for (const name of OF_DIVERSION) this.unknown(name, 'the two heaters were never logged at the same time');
      return null;
    }
    this.set('heaterKwh', total / 1000, metered);
    const [bought, known] = this.boughtBy(heaters, steps);
    const exported = this.sums.has('export') ? this.cursors.get('export') : undefined;
    const flows = this.walk(heaters, bought, exported, instants);
    if (!flows.coveredMs) {
      for (const name of OF_DIVERSION)
        if (name !== 'heaterKwh')
          this.unknown(name, 'import and heater were never logged at the same time on this day');
      return null;
    }
    const sums = { steps, flows, diverted: sumOf(flows.diverted), bought: sumOf(flows.bought) };
    this.set('boughtHeatKwh', sums.bought / 1000, known ? 'workedOut' : 'assumed');
    if (!known)
      this.told.push('Without import readings or the property’s place, all heater energy is taken as diverted.');
    const rests = metered === 'assumed' || !known ? 'assumed' : sums.bought > 0 ? 'workedOut' : metered;
    this.set('divertedKwh', sums.diverted / 1000, rests);
    this.surplusCaught(flows, rests);
    return sums;
  }

  private walk(heaters: readonly Cursor[], bought: Bought, exported: Cursor | undefined, steps: number[]): Flows {
    return inWh(flowsOf(heaters, bought, exported, steps, this.from, this.to));
  }

  /** How bought heat is told apart on this day, and whether it is known at all. */
  private boughtBy(heaters: readonly Cursor[], steps: readonly PriceStep[]): [Bought, known: boolean] {
    const imported = this.sums.has('import') ? this.cursors.get('import') : undefined;
    if (imported && [imported, ...heaters].every((cursor) => this.stepOf(cursor) <= FINE_SECONDS))
      return [{ import: imported }, true];
    const { latitude, longitude } = this.home;
    const placed = latitude !== null && longitude !== null;
    const dark = placed ? darkness(this.from, this.to, latitude, longitude) : [];
    const cheap: Stretches = [];
    steps.forEach(({ at, importPerKwh }, i) => {
      if (this.tariff && importPerKwh < this.tariff.importPerKwh) cheap.push([at, steps[i + 1]?.at ?? this.to]);
    });
    return [{ dark: union([...dark, ...cheap]) }, placed || cheap.length > 0];
  }

  /** The longest nominal interval of the logs that speak on this day, seconds. */
  private stepOf({ trace }: Cursor): number {
    let longest = 0;
    for (const { from, to, intervalSeconds } of trace.runs)
      if (from < this.to && to > this.from) longest = Math.max(longest, intervalSeconds || Infinity);
    return longest;
  }

  private surplusCaught({ divertedThen, exportedThen, sharedMs }: Flows, rests: Rests): void {
    if (!this.sums.has('export')) this.unknown('surplusCaught', 'no export readings on this day');
    else if (!sharedMs)
      this.unknown('surplusCaught', 'export and diversion were never logged at the same time on this day');
    else if (divertedThen + exportedThen <= 0) this.unknown('surplusCaught', 'there was no surplus on this day');
    else
      this.set(
        'surplusCaught',
        divertedThen / (divertedThen + exportedThen),
        rests === 'assumed' ? rests : 'workedOut',
      );
  }

  private usefulHeat(heat: Heat): number {
    const diverted = heat.diverted / 1000;
    const f = DEFAULTS.storeFactor.value;
    const useful = this.set('usefulHeatKwh', diverted * f, 'assumed');
    this.ranges.usefulHeatKwh = [round(useful), round(diverted)];
    const litres = litresAt40(useful, this.coldFeed());
    if (litres === null) this.unknown('litresAt40', 'the cold feed is too warm to count litres at 40 °C');
    else this.set('litresAt40', litres, 'assumed');
    return useful;
  }

  /** Cold feed, °C: the day's lowest reading of its sensor (its pipe warms while nothing is drawn), else by month. */
  private coldFeed(): number {
    const cursor = this.sums.has('coldFeed') ? this.cursors.get('coldFeed') : undefined;
    const measured = cursor && leastOf(cursor, this.from, this.to);
    return measured ?? coldFeedC(Number(this.date.slice(5, 7)), this.home.latitude);
  }

  /** Fuel not burnt, kWh gross; null for a home without a boiler. */
  private displaced(useful: number): number | null {
    const { boiler } = this.system;
    const efficiency = hotWaterEfficiency(boiler);
    if (!efficiency) {
      const reason = 'no boiler is recorded, so no fuel is displaced';
      this.unknown('gasDisplacedKwh', reason);
      this.unknown('gasDisplacedM3', reason);
      return this.unknown('fuelDisplacedLitres', reason);
    }
    const kwh = this.set('gasDisplacedKwh', useful / efficiency.value, 'workedOut');
    this.ranges.gasDisplacedKwh = [round(useful / efficiency.range[1]), round(useful / efficiency.range[0])];
    const cv = calorificValue(boiler) as number;
    const rests = boiler.calorificValue === undefined ? 'assumed' : 'workedOut';
    if (boiler.fuel === 'gas') {
      this.set('gasDisplacedM3', gasM3(kwh, cv), rests);
      this.unknown('fuelDisplacedLitres', 'mains gas is counted in m³');
    } else {
      this.set('fuelDisplacedLitres', kwh / cv, rests);
      this.unknown('gasDisplacedM3', 'this boiler’s fuel is counted in litres');
    }
    return kwh;
  }

  private fuelMeasured(): void {
    const sum = this.sums.get('gas');
    if (!sum) {
      this.unknown('fuelMeasuredKwh', 'no gas readings on this day');
      this.unknown('fuelMeasuredM3', 'no gas readings on this day');
      return;
    }
    const cv = calorificValue(this.system.boiler);
    const { fuel } = this.system.boiler;
    const kwh = this.inKwh('gas', sum.total);
    if (this.cursors.get('gas')?.trace.volumetric) {
      if (fuel === 'gas' || fuel === 'none') this.set('fuelMeasuredM3', sum.total, 'measured');
      else this.unknown('fuelMeasuredM3', 'this boiler’s fuel is counted in litres');
      if (kwh === null) this.unknown('fuelMeasuredKwh', 'no calorific value is known for this meter’s fuel');
      else this.set('fuelMeasuredKwh', kwh, 'workedOut');
    } else {
      this.set('fuelMeasuredKwh', sum.total / 1000, 'measured');
      if (fuel === 'gas' && cv !== null) this.set('fuelMeasuredM3', gasM3(sum.total / 1000, cv), 'workedOut');
      else this.unknown('fuelMeasuredM3', 'the meter counts kWh, and the boiler burns no mains gas');
    }
  }

  /** Money: fuel not bought, less the export given up, less the heat that was bought. */
  private saving(heat: Heat, useful: number, displaced: number | null): Day['savingTerms'] {
    const { tariff } = this;
    if (!tariff) {
      this.unknown('netSaving', 'no tariff is recorded for this day');
      return NO_SAVING;
    }
    const fuel = displaced === null ? useful * tariff.importPerKwh : displaced * tariff.fuelPerKwh;
    const gaveUp = (tariff.exportPayment ?? 'metered') === 'metered';
    const exported = gaveUp ? priced(heat.flows.diverted, heat.steps, 'exportPerKwh') : 0;
    const bought = priced(heat.flows.bought, heat.steps, 'importPerKwh');
    if (!gaveUp) this.told.push(`Export is paid as ${tariff.exportPayment}: diverting gives nothing up.`);
    this.set('netSaving', fuel - exported - bought, 'workedOut');
    return { fuel: round(fuel), export: round(-exported), bought: round(-bought) };
  }

  private carbon(heat: Heat | null, displaced: number | null): Day['co2Terms'] {
    if (!heat) return NO_CARBON;
    if (displaced === null) {
      this.unknown('co2SavedKg', 'no fuel is displaced');
      return NO_CARBON;
    }
    const year = Number(this.date.slice(0, 4));
    const factors = carbonFactors(this.home.country, year, this.system.boiler.fuel);
    if (!factors) {
      this.unknown('co2SavedKg', 'no carbon factors are known for this country and year');
      return NO_CARBON;
    }
    const fuel = displaced * factors.fuel;
    const grid = (heat.diverted / 1000) * factors.electricity;
    this.set('co2SavedKg', fuel - grid, 'workedOut');
    if (factors.year !== year) this.told.push(`Carbon factors are those of ${factors.year}, the latest known.`);
    return { fuel: round(fuel), grid: round(-grid) };
  }

  private tank(): Tank {
    const sensor = tankSensor((channel) => this.sums.has(channel), this.system);
    const cursor = sensor && this.cursors.get(sensor);
    const [hour, minute] = this.home.ready.time.split(':').map(Number);
    const local = civilDay(this.date) * DAY_MS + hour * HOUR_MS + minute * 60_000;
    const tank =
      cursor &&
      tankOfDay(cursor, sensor, this.from, this.to, {
        readyAt: this.zone.localToUtc(local)[0] ?? local - this.zone.offsetAt(this.from),
        readyC: this.home.ready.temperatureC,
        hygieneC: this.system.hygieneC ?? DEFAULTS.hygieneC.value,
      });
    if (!tank) return NO_TANK;
    const rounded = (value: number | null) => (value === null ? null : round(value, 4));
    this.rests.tank = 'measured';
    return {
      ...tank,
      minC: rounded(tank.minC),
      maxC: rounded(tank.maxC),
      atReadyC: rounded(tank.atReadyC),
      hygieneHours: rounded(tank.hygieneHours),
      longestHygieneHours: rounded(tank.longestHygieneHours),
    };
  }
}

interface Heat {
  steps: PriceStep[];
  flows: Flows;
  /** Wh */
  diverted: number;
  bought: number;
}

function sumOf(values: Float64Array): number {
  let sum = 0;
  for (const value of values) sum += value;
  return sum;
}

/** All heater energy of a walk without bought heat, Wh; `null` where the heaters never cover the same time. */
function heatOf({ diverted, coveredMs }: Flows): number | null {
  return coveredMs ? sumOf(diverted) : null;
}

/** Wh by price step, times the price of each. */
function priced(wh: Float64Array, steps: readonly PriceStep[], price: 'importPerKwh' | 'exportPerKwh'): number {
  return steps.reduce((sum, step, i) => sum + (wh[i] / 1000) * step[price], 0);
}

const HEATERS = ['diversion', 'diversion2'] as const satisfies readonly Channel[];
const NO_DIVERSION = 'no diversion readings on this day';
const OF_DIVERSION: readonly FigureName[] = [
  'heaterKwh',
  'boughtHeatKwh',
  'divertedKwh',
  'surplusCaught',
  'usefulHeatKwh',
  'litresAt40',
  'gasDisplacedKwh',
  'gasDisplacedM3',
  'fuelDisplacedLitres',
  'netSaving',
  'co2SavedKg',
];
const OF_BALANCE: readonly FigureName[] = [
  'fuelHeatKwh',
  'drawHeatKwh',
  'standingLossKwh',
  'storeChangeKwh',
  'residualKwh',
  'solarFraction',
  'missedSunKwh',
  'missedSunValue',
];
const NO_BALANCE = 'the cylinder’s heat balance is not worked out for this day';
const NO_SAVING: Day['savingTerms'] = { fuel: null, export: null, bought: null };
const NO_CARBON: Day['co2Terms'] = { fuel: null, grid: null };
export const NO_TANK: Tank = {
  sensor: null,
  minC: null,
  maxC: null,
  atReadyC: null,
  readyMet: null,
  hygieneHours: null,
  longestHygieneHours: null,
};
