import { Cylinder } from './cylinder.ts';
import { find, type Fault } from './faults.ts';
import type { Home } from './home.ts';

/** What the faults of a day make of the plant. */
export interface Conditions {
  clamp: 'right' | 'dead' | 'reversed' | 'panelsCable' | 'otherPhase';
  /** Share of the rated power that each position still takes. */
  lowerShare: number;
  upperShare: number;
  elsewhere: boolean;
  diverterOff: boolean;
  biasW: number;
  relay: 'right' | 'never' | 'stuck';
  relayShown: boolean;
  noHeat: boolean;
  heaterThermostatC: number | null;
  backupThermostatC: number | null;
  targetC: number | null;
  lossFactor: number;
  topWPerK: number;
}

/** The conditions that a day's faults bring about. */
export function conditionsOf(faults: readonly Fault[]): Conditions {
  const open = find(faults, 'heaterOpen');
  const weak = find(faults, 'heaterWeak')?.share ?? 1;
  const stuck = find(faults, 'relayStuck');
  const loss = find(faults, 'lossHigh');
  const early = faults.filter((f): f is Fault & { kind: 'thermostatLow' } => f.kind === 'thermostatLow');
  const cool = find(faults, 'hygieneShort')?.celsius ?? null;
  return {
    clamp: find(faults, 'clampDead')
      ? 'dead'
      : find(faults, 'clampReversed')
        ? 'reversed'
        : (find(faults, 'clampElsewhere')?.sees ?? 'right'),
    lowerShare: open && open.position !== 'upper' ? 0 : weak,
    upperShare: open && open.position !== 'lower' ? 0 : weak,
    elsewhere: find(faults, 'heatElsewhere') !== undefined,
    diverterOff: find(faults, 'diverterOff') !== undefined,
    biasW: find(faults, 'biasImport')?.watts ?? 0,
    relay: stuck ? 'stuck' : find(faults, 'relayNeverCalls') ? 'never' : 'right',
    relayShown: stuck?.shown ?? true,
    noHeat: find(faults, 'relayNoHeat') !== undefined,
    heaterThermostatC: find(faults, 'overheat')?.celsius ?? early.find((f) => f.which === 'heater')?.celsius ?? cool,
    backupThermostatC: stuck?.thermostatC ?? early.find((f) => f.which === 'backup')?.celsius ?? cool,
    targetC: find(faults, 'backupBeforeSun')?.targetC ?? cool,
    lossFactor: loss?.factor ?? 1,
    topWPerK: loss?.topWPerK ?? 0,
  };
}

/** What the outside does to the plant in one step. */
export interface Outside {
  seconds: number;
  /** Household load and battery less the panels' possible output, W. */
  baseW: number;
  panelsW: number;
  volts: number;
  /** Water at the taps, litres, and the temperature it is mixed to. */
  tapLitres: number;
  useC: number;
  coldC: number;
  ambientC: number;
  /** The clock allows the backup; the clock wants a boost. */
  allowed: boolean;
  boost: boolean;
}

/** Stored water never gets hotter than this: the relief valve opens first. */
const RELIEF_C = 95;

/** Cylinder, heaters, diverter, relay and boiler: everything that has a state. A step changes it; the fields after it say what flowed. */
export class Plant {
  readonly cylinder: Cylinder;
  private readonly closed: boolean[];
  private readonly upper: number;
  private readonly lower: number;
  /** Element resistances, Ω: rated volts squared over rated power. */
  private readonly ohms: number[];
  private calling = false;
  private relayOn = false;
  private command = 0;
  private coil = 0;
  /** What the diverter's clamp last said, W, positive = import. */
  seenW = 0;

  lowerW = 0;
  upperW = 0;
  boughtW = 0;
  gridW = 0;
  curtailedW = 0;
  coilW = 0;
  drawWh = 0;
  litres = 0;
  /** Heat that went into the store's water from the heaters, W (less than their power only when it goes elsewhere). */
  heaterHeatW = 0;

  constructor(
    private readonly home: Home,
    startC: number,
    private readonly divert: boolean,
  ) {
    this.cylinder = new Cylinder(home.cylinder, startC);
    this.closed = home.heaters.map(() => true);
    this.upper = home.heaters.findIndex((heater) => heater.position === 'upper');
    this.lower = home.heaters.findIndex((heater) => heater.position === 'lower');
    this.ohms = home.heaters.map((heater) => heater.ratedVolts ** 2 / heater.ratedW);
  }

  /** Takes over the state of the same plant, to see what it would have done otherwise. */
  become(other: Plant): void {
    this.cylinder.temps.set(other.cylinder.temps);
    for (let i = 0; i < this.closed.length; i++) this.closed[i] = other.closed[i];
    this.calling = other.calling;
    this.relayOn = other.relayOn;
    this.command = other.command;
    this.coil = other.coil;
    this.seenW = other.seenW;
  }

  /** Whether the relay lets the backup heat. */
  get relay(): boolean {
    return this.relayOn;
  }

  /** One step of heaters, relay, boiler and taps. Standing loss comes apart, in `rest`: it changes in hours, not seconds. */
  step(outside: Outside, now: Conditions): void {
    const { home, cylinder } = this;
    this.heaters(outside, now);
    this.backup(outside, now);
    this.litres = 0;
    this.drawWh = 0;
    if (outside.tapLitres > 0) {
      const top = cylinder.temps[cylinder.temps.length - 1];
      const mix = top > outside.useC ? (outside.useC - outside.coldC) / (top - outside.coldC) : 1;
      this.litres = outside.tapLitres * mix;
      this.drawWh = cylinder.draw(this.litres, outside.coldC);
    }
    if (this.coilW > 0) cylinder.heat((this.coilW * outside.seconds) / 3600, 0.03, home.boiler?.coilHigh ?? 0.4);
    if (this.coilW > 0 || this.heaterHeatW > 0) cylinder.settle();
  }

  /** Standing loss and conduction for some seconds. Returns the loss, Wh. */
  rest(seconds: number, ambientC: number, now: Conditions): number {
    const lost = this.cylinder.rest(seconds, ambientC, now.lossFactor, now.topWPerK);
    this.cylinder.settle();
    return lost;
  }

  /** What a closed element of full resistance takes, W; 0 while its thermostat is open. */
  private full(i: number, volts: number, share: number): number {
    return i < 0 || !this.closed[i] ? 0 : ((volts * volts) / this.ohms[i]) * share;
  }

  private thermostats(now: Conditions): void {
    const { home, cylinder } = this;
    const hot = cylinder.temps[cylinder.temps.length - 1] >= RELIEF_C;
    for (let i = 0; i < home.heaters.length; i++) {
      const heater = home.heaters[i];
      const opensC = now.heaterThermostatC ?? heater.thermostatC;
      const beside = cylinder.at(heater.high);
      if (beside >= opensC || hot) this.closed[i] = false;
      else if (beside < opensC - heater.hysteresisK) this.closed[i] = true;
    }
  }

  private clampSees(outside: Outside, now: Conditions): number {
    switch (now.clamp) {
      case 'dead':
        return 0;
      case 'reversed':
        return -this.gridW;
      case 'panelsCable':
        return this.curtailedW - outside.panelsW;
      case 'otherPhase':
        return Math.max(0, (outside.baseW + outside.panelsW) * 0.3);
      case 'right':
        return this.gridW;
    }
  }

  private heaters(outside: Outside, now: Conditions): void {
    const { home, cylinder } = this;
    this.thermostats(now);
    const upperFull = this.full(this.upper, outside.volts, now.upperShare);
    const lowerFull = this.full(this.lower, outside.volts, now.lowerShare);
    const full = upperFull > 0 ? upperFull : lowerFull;
    if (outside.boost) this.command = 0;
    else this.control(full, now);
    const heaterW = outside.boost ? full : this.command;
    this.upperW = upperFull > 0 ? heaterW : 0;
    this.lowerW = heaterW - this.upperW;
    const limit = home.exportLimitW;
    const grid = outside.baseW + heaterW;
    this.curtailedW = limit !== null && grid < -limit ? -limit - grid : 0;
    this.gridW = grid + this.curtailedW;
    this.boughtW = Math.max(0, grid) - Math.max(0, outside.baseW);
    this.seenW = this.clampSees(outside, now) * (1 + home.meters.diverterError);
    this.heaterHeatW = now.elsewhere ? 0 : heaterW;
    if (this.heaterHeatW > 0) {
      const { low, high } = home.heaters[upperFull > 0 ? this.upper : this.lower];
      cylinder.heat((heaterW * outside.seconds) / 3600, low, high);
    }
  }

  /** The diverter's loop: an integrating control on what the clamp said a step ago, with a threshold and a dead band. */
  private control(fullW: number, now: Conditions): void {
    const { diverter } = this.home;
    if (!diverter || !this.divert || now.diverterOff || fullW <= 0) {
      this.command = 0;
      return;
    }
    const error = -this.seenW - (now.biasW > 0 ? -now.biasW : diverter.targetExportW);
    if (this.command === 0) {
      if (error > diverter.thresholdW - diverter.targetExportW) this.command = diverter.gain * error;
    } else if (Math.abs(error) > diverter.bandW) this.command += diverter.gain * error;
    this.command = Math.min(fullW, Math.max(0, this.command));
  }

  private backup(outside: Outside, now: Conditions): void {
    const { boiler, relay } = this.home;
    const { cylinder } = this;
    this.coilW = 0;
    const targetC = now.targetC ?? relay.targetC;
    const at = cylinder.at(relay.sensorHeight);
    if (now.relay === 'never' || !outside.allowed || at >= targetC) this.relayOn = false;
    else if (at < targetC - relay.hysteresisK) this.relayOn = true;
    if (!boiler) return;
    const opensC = now.backupThermostatC ?? boiler.thermostatC;
    const beside = cylinder.at(boiler.thermostatHeight);
    if (beside >= opensC) this.calling = false;
    else if (beside < opensC - boiler.hysteresisK) this.calling = true;
    const on = (this.relayOn || now.relay === 'stuck') && this.calling && !now.noHeat;
    const around = cylinder.at(boiler.coilHigh / 2);
    const wanted = on ? Math.min(boiler.maxW, Math.max(0, boiler.coilWPerK * (boiler.flowC - around))) : 0;
    this.coil += (wanted - this.coil) * (1 - Math.exp(-outside.seconds / 75));
    if (this.coil < 40 && !on) this.coil = 0;
    this.coilW = this.coil;
  }
}
