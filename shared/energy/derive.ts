import type { Day, FigureName, Rests, Tank } from '../api/day.ts';
import { FIGURES } from '../api/day.ts';
import type { DatedSystem, DatedTariff } from '../api/property.ts';
import { civilDay, DAY_MS, type Zone, zoneOf } from '../time/zone.ts';
import { CHANNELS, type Channel } from '../units/channels.ts';
import { gasKwh, gasM3 } from '../units/convert.ts';
import { boughtByImport, darkness, FINE_SECONDS } from './bought.ts';
import { carbonFactors } from './carbon.ts';
import { DEFAULTS } from './defaults.ts';
import { calorificValue, hotWaterEfficiency } from './fuel.ts';
import type { Home } from './home.ts';
import type { Trace } from './layer.ts';
import { withoutNegatives } from './negatives.ts';
import { Cursor, integrate, type Sum, together } from './sums.ts';
import { tankOfDay, tankSensor } from './tank.ts';
import { inForce, priceSteps, type Price } from './tariff.ts';
import type { TraceSet } from './trace.ts';
import { coldFeedC, litresAt40 } from './water.ts';

/** A day is complete for a figure when each of its channels covers this share of it. */
export const COMPLETE = 0.95;

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
  const notes = new Map<Channel, string>();
  for (const [channel, trace] of traces.traces) {
    if (!NOT_NEGATIVE.has(channel)) {
      cursors.set(channel, new Cursor(trace));
      continue;
    }
    const cleaned = withoutNegatives(trace);
    cursors.set(channel, new Cursor(cleaned.trace));
    if (cleaned.unknown) notes.set(channel, 'negative values beyond a meter’s idle jitter: that time is unknown');
  }
  return dates.map((date) => new DayBook(date, zone, home, cursors, notes).day());
}

const NOT_NEGATIVE: ReadonlySet<Channel> = new Set([
  'export',
  'import',
  'generation',
  'diversion',
  'diversion2',
  'gas',
]);

const round = (value: number, digits = 6) => {
  const rounded = Number(value.toFixed(digits));
  return rounded === 0 ? 0 : rounded;
};

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
    notes: ReadonlyMap<Channel, string>,
  ) {
    const { start, end } = zone.dayBounds(date);
    this.from = start;
    this.to = end;
    this.system = inForce(home.systems, date) as DatedSystem;
    this.tariff = inForce(home.tariffs, date);
    for (const name of FIGURES) this.figures[name] = null;
    for (const channel of CHANNELS) {
      const cursor = cursors.get(channel);
      if (!cursor) continue;
      const sum = integrate(cursor, this.from, this.to);
      if (sum.spread) this.spread[channel] = round(sum.spread / 1000);
      if (!sum.any) continue;
      this.sums.set(channel, sum);
      this.coverage[channel] = round(sum.coveredMs / (this.to - this.from), 6);
      const note = notes.get(channel);
      if (note && this.coverage[channel] !== 1) this.told.push(`${channel}: ${note}`);
    }
  }

  day(): Day {
    this.metered('exportKwh', 'export');
    this.metered('importKwh', 'import');
    this.metered('generationKwh', 'generation');
    const heat = this.heat();
    if (heat) this.surplusCaught(heat);
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

  /** Heater energy and how much of it was bought: by instant against import, else by the dark and the cheap hours. */
  private heat(): Heat | null {
    const heaters = HEATERS.filter((channel) => this.sums.has(channel));
    if (!heaters.length) return null;
    const cursors = heaters.map((channel) => this.cursors.get(channel) as Cursor);
    const total = heaters.reduce((sum, channel) => sum + (this.sums.get(channel) as Sum).total, 0);
    const metered = this.system.diversionIs === 'estimated' ? 'assumed' : 'measured';
    this.set('heaterKwh', total / 1000, metered);
    const imported = this.sums.has('import') ? this.cursors.get('import') : undefined;
    const fine = imported && [imported, ...cursors].every((c) => c.trace.intervalSeconds <= FINE_SECONDS);
    const heat: Heat = { cursors, total, bought: 0, boughtIn: () => 0, rests: 'workedOut' };
    if (fine) {
      heat.boughtIn = (a, b) => boughtByImport(cursors, imported, a, b) ?? 0;
      heat.bought = heat.boughtIn(this.from, this.to);
    } else {
      const stretches = this.notTheSun();
      if (!stretches) heat.rests = 'assumed';
      else {
        heat.boughtIn = (a, b) => {
          let sum = 0;
          for (const [s, e] of stretches)
            if (s < b && e > a)
              for (const cursor of cursors) sum += integrate(cursor, Math.max(s, a), Math.min(e, b)).total;
          return sum;
        };
        heat.bought = heat.boughtIn(this.from, this.to);
      }
    }
    this.set('boughtHeatKwh', heat.bought / 1000, heat.rests);
    if (heat.rests === 'assumed')
      this.told.push('Without import readings or the property’s place, all heater energy is taken as diverted.');
    const rests =
      metered === 'assumed' || heat.rests === 'assumed' ? 'assumed' : heat.bought > 0 ? 'workedOut' : metered;
    this.set('divertedKwh', (total - heat.bought) / 1000, rests);
    return heat;
  }

  /** Stretches in which heater energy cannot be surplus: darkness, and recorded off-peak windows; null if unknown. */
  private notTheSun(): [number, number][] | null {
    const { latitude, longitude } = this.home;
    const stretches = latitude !== null && longitude !== null ? darkness(this.from, this.to, latitude, longitude) : [];
    const windows = this.tariff ? priceSteps(this.tariff, 'importPerKwh', this.zone, this.from, this.to) : [];
    windows.forEach(({ at, price }, i) => {
      if (this.tariff && price < this.tariff.importPerKwh) stretches.push([at, windows[i + 1]?.at ?? this.to]);
    });
    if (!stretches.length && latitude === null) return null;
    return union(stretches);
  }

  private surplusCaught(heat: Heat): void {
    const exported = this.cursors.get('export');
    if (!exported || !this.sums.has('export')) {
      this.unknown('surplusCaught', 'no export readings on this day');
      return;
    }
    const all = [exported, ...heat.cursors];
    let out = 0;
    let heater = 0;
    let any = false;
    let bought = 0;
    together(all, this.from, this.to, (a, b, starts, ends) => {
      any = true;
      const h = (b - a) / HOUR_MS;
      out += ((starts[0] + ends[0]) / 2) * h;
      for (let k = 1; k < all.length; k++) heater += ((starts[k] + ends[k]) / 2) * h;
    });
    if (heat.bought > 0) bought = Math.min(heat.bought, heater);
    const diverted = heater - bought;
    if (!any) this.unknown('surplusCaught', 'export and diversion were never logged at the same time on this day');
    else if (diverted + out <= 0) this.unknown('surplusCaught', 'there was no surplus on this day');
    else this.set('surplusCaught', diverted / (diverted + out), 'workedOut');
  }

  private usefulHeat(heat: Heat): number {
    const diverted = (heat.total - heat.bought) / 1000;
    const f = DEFAULTS.storeFactor.value;
    const useful = this.set('usefulHeatKwh', diverted * f, 'assumed');
    this.ranges.usefulHeatKwh = [round(useful), round(diverted)];
    const month = Number(this.date.slice(5, 7));
    const litres = litresAt40(useful, coldFeedC(month, this.home.latitude));
    if (litres === null) this.unknown('litresAt40', 'the cold feed is too warm to count litres at 40 °C');
    else this.set('litresAt40', litres, 'assumed');
    return useful;
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
    const volumetric = this.cursors.get('gas')?.trace.volumetric ?? false;
    if (volumetric) {
      if (fuel === 'gas' || fuel === 'none') this.set('fuelMeasuredM3', sum.total, 'measured');
      else this.unknown('fuelMeasuredM3', 'this boiler’s fuel is counted in litres');
      if (cv === null) this.unknown('fuelMeasuredKwh', 'no calorific value is known for this meter’s fuel');
      else this.set('fuelMeasuredKwh', fuel === 'gas' ? gasKwh(sum.total, cv) : sum.total * 1000 * cv, 'workedOut');
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
    const exported = gaveUp ? this.priced(heat, tariff, 'exportPerKwh', (a, b, h) => h - heat.boughtIn(a, b)) : 0;
    const bought = heat.bought ? this.priced(heat, tariff, 'importPerKwh', (a, b) => heat.boughtIn(a, b)) : 0;
    if (!gaveUp) this.told.push(`Export is paid as ${tariff.exportPayment}: diverting gives nothing up.`);
    this.set('netSaving', fuel - exported - bought, 'workedOut');
    return { fuel: round(fuel), export: round(-exported), bought: round(-bought) };
  }

  /** Energy (Wh) of each stretch of one price, times that price per kWh. */
  private priced(
    heat: Heat,
    tariff: DatedTariff,
    price: Price,
    energy: (from: number, to: number, heaterWh: number) => number,
  ): number {
    const steps = priceSteps(tariff, price, this.zone, this.from, this.to);
    let sum = 0;
    steps.forEach((step, i) => {
      const end = steps[i + 1]?.at ?? this.to;
      const heater = heat.cursors.reduce((wh, cursor) => wh + integrate(cursor, step.at, end).total, 0);
      sum += (energy(step.at, end, heater) / 1000) * step.price;
    });
    return sum;
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
    const grid = ((heat.total - heat.bought) / 1000) * factors.electricity;
    this.set('co2SavedKg', fuel - grid, 'workedOut');
    if (factors.year !== year) this.told.push(`Carbon factors are those of ${factors.year}, the latest known.`);
    return { fuel: round(fuel), grid: round(-grid) };
  }

  private tank(): Tank {
    const traces = new Map([...this.cursors].map(([channel, cursor]) => [channel, cursor.trace] as [Channel, Trace]));
    const sensor = tankSensor(traces, this.system);
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
  cursors: Cursor[];
  /** Wh */
  total: number;
  bought: number;
  /** Bought heat, Wh, in a part of the day. */
  boughtIn: (from: number, to: number) => number;
  rests: Rests;
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

function union(stretches: [number, number][]): [number, number][] {
  const out: [number, number][] = [];
  for (const [a, b] of stretches.sort((x, y) => x[0] - y[0])) {
    const last = out[out.length - 1];
    if (last && a <= last[1]) last[1] = Math.max(last[1], b);
    else out.push([a, b]);
  }
  return out;
}
