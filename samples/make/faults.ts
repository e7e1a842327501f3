/**
 * What can be broken in a simulated home, one entry for each fault that logs can show. Physical faults change what
 * happens; faults of a meter or logger change only what is measured.
 */
export type FaultKind =
  /** The diverter's clamp reads nothing: it never sees surplus. */
  | { kind: 'clampDead' }
  /** The diverter's clamp sits the wrong way round: it takes import for surplus. */
  | { kind: 'clampReversed' }
  /** The clamp sees something else than the home's exchange with the grid. */
  | { kind: 'clampElsewhere'; sees: 'panelsCable' | 'otherPhase' }
  /** No current through the heater (open element, tripped cut-out, fused spur off). */
  | { kind: 'heaterOpen'; position?: 'lower' | 'upper' }
  /** The diverter is off, in holiday mode, or held by its timer. */
  | { kind: 'diverterOff' }
  /** Part of the heater is gone: power falls to this share. */
  | { kind: 'heaterWeak'; share: number }
  /** Power is metered into a heater that does not warm this water. */
  | { kind: 'heatElsewhere' }
  /** The heater is boosted with bought power in these windows. */
  | { kind: 'boostLeftOn'; start: string; end: string }
  /** The diverter's control band sits on the import side by this much, W. */
  | { kind: 'biasImport'; watts: number }
  | { kind: 'relayNeverCalls' }
  /** Backup always allowed. `shown`: whether the relay's log shows it. `thermostatC`: the cylinder thermostat, if it too is off. */
  | { kind: 'relayStuck'; shown: boolean; thermostatC?: number }
  /** The relay calls and the boiler brings nothing. */
  | { kind: 'relayNoHeat' }
  /** The backup's timer runs in these windows instead. */
  | { kind: 'backupBeforeSun'; start: string; end: string; targetC: number }
  /** A thermostat that opens early. */
  | { kind: 'thermostatLow'; which: 'heater' | 'backup'; celsius: number }
  /** Standing loss multiplied (lagging missing), or an extra loss from the top, W/K (thermosiphon). */
  | { kind: 'lossHigh'; factor?: number; topWPerK?: number }
  /** The heater's thermostat has welded; the cut-out opens at this temperature. */
  | { kind: 'overheat'; celsius: number }
  /** Backup and heater set too low to keep the store hygienic. */
  | { kind: 'hygieneShort'; celsius: number }
  | { kind: 'exportDead' }
  /** Import and export exchanged in the log (a signed value turned round). */
  | { kind: 'exportReversed' }
  | { kind: 'scaleWrong'; channel: string; factor: number }
  | { kind: 'sensorFlat'; channel: string; celsius?: number }
  /** Fault values. `share` of the minutes (1 = all). */
  | { kind: 'sensorFault'; channel: string; value: number; share: number }
  | { kind: 'sensorsSwapped' }
  /** The logger's clock is ahead by so many minutes. `summerOnly`: it does not follow daylight saving. */
  | { kind: 'clockOff'; minutes: number; summerOnly?: boolean }
  /** Nothing logged. `everyDays` and `hours`: holes instead of silence. `channels`: only these. */
  | { kind: 'logHoles'; everyDays?: number; hours?: number; channels?: string[] }
  /** A counter starts again from zero on the first day. */
  | { kind: 'registerReset'; channel: string };

/** A fault from the first moment of one civil date to the first moment of another (open: for good). */
export type Fault = FaultKind & { from: string; to?: string };

/** The faults at work on one civil day. */
export function faultsOn(faults: readonly Fault[], date: string): Fault[] {
  return faults.filter((fault) => fault.from <= date && (fault.to === undefined || date < fault.to));
}

/** The first fault of a kind among some, typed. */
export function find<K extends FaultKind['kind']>(
  faults: readonly Fault[],
  kind: K,
): (Fault & { kind: K }) | undefined {
  return faults.find((fault): fault is Fault & { kind: K } => fault.kind === kind);
}
