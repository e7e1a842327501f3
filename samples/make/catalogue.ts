import type { Fault, FaultKind } from './faults.ts';
import { like, type Home } from './home.ts';

/** One way in which a fault of the list of checks can come about in a simulated home. */
export interface Case {
  /** What is broken. */
  fault: FaultKind;
  /** Month in which it shows best in the north, 1..12. */
  month: number;
  /** What else the home must have for it. */
  change?(home: Home): Home;
}

const byClamp = (home: Home): Home => like(home, { meters: { exportBy: 'diverterClamp' } });

/** Every fault of the list of checks, by the check that should name it, each in one or more variants. */
export const CATALOGUE: Record<string, Case[]> = {
  'no-diversion': [
    { fault: { kind: 'clampDead' }, month: 6 },
    { fault: { kind: 'heaterOpen' }, month: 5 },
    { fault: { kind: 'diverterOff' }, month: 8 },
  ],
  'surplus-unseen': [{ fault: { kind: 'clampDead' }, month: 6, change: byClamp }],
  'export-dead': [{ fault: { kind: 'exportDead' }, month: 7 }],
  'clamp-reversed': [
    { fault: { kind: 'clampReversed' }, month: 5 },
    { fault: { kind: 'clampReversed' }, month: 6, change: byClamp },
  ],
  'export-reversed': [{ fault: { kind: 'exportReversed' }, month: 6 }],
  'clamp-elsewhere': [
    { fault: { kind: 'clampElsewhere', sees: 'panelsCable' }, month: 5 },
    { fault: { kind: 'clampElsewhere', sees: 'otherPhase' }, month: 6 },
  ],
  'scale-wrong': [
    { fault: { kind: 'scaleWrong', channel: 'diversion', factor: 2 }, month: 5 },
    { fault: { kind: 'scaleWrong', channel: 'export', factor: 0.5 }, month: 6 },
    { fault: { kind: 'scaleWrong', channel: 'diversion', factor: 1000 }, month: 6 },
    { fault: { kind: 'scaleWrong', channel: 'gas', factor: 2.8316847 }, month: 1 },
  ],
  'grid-heating': [
    { fault: { kind: 'boostLeftOn', start: '19:00', end: '20:30' }, month: 3 },
    { fault: { kind: 'biasImport', watts: 400 }, month: 5 },
  ],
  'heater-weak': [{ fault: { kind: 'heaterWeak', share: 0.5 }, month: 6 }],
  'no-rise': [{ fault: { kind: 'heatElsewhere' }, month: 5 }],
  'relay-never-calls': [{ fault: { kind: 'relayNeverCalls' }, month: 12 }],
  'relay-stuck': [
    { fault: { kind: 'relayStuck', shown: true }, month: 6 },
    { fault: { kind: 'relayStuck', shown: false }, month: 1 },
  ],
  'relay-no-heat': [{ fault: { kind: 'relayNoHeat' }, month: 1 }],
  'backup-before-sun': [{ fault: { kind: 'backupBeforeSun', start: '05:30', end: '07:30', targetC: 60 }, month: 5 }],
  'thermostat-low': [
    { fault: { kind: 'thermostatLow', which: 'heater', celsius: 46 }, month: 6 },
    { fault: { kind: 'thermostatLow', which: 'backup', celsius: 42 }, month: 12 },
  ],
  'loss-high': [
    { fault: { kind: 'lossHigh', factor: 2.5 }, month: 3 },
    { fault: { kind: 'lossHigh', topWPerK: 2.5 }, month: 10 },
  ],
  overheat: [
    { fault: { kind: 'overheat', celsius: 74 }, month: 6 },
    { fault: { kind: 'overheat', celsius: 88 }, month: 6 },
  ],
  'hygiene-short': [{ fault: { kind: 'hygieneShort', celsius: 52 }, month: 6 }],
  'sensor-flat': [{ fault: { kind: 'sensorFlat', channel: 'tankTop' }, month: 5 }],
  'sensor-fault': [
    { fault: { kind: 'sensorFault', channel: 'tankTop', value: -127, share: 0.05 }, month: 4 },
    { fault: { kind: 'sensorFault', channel: 'tankBottom', value: 85, share: 0.01 }, month: 9 },
    { fault: { kind: 'sensorFault', channel: 'tankTop', value: -40, share: 1 }, month: 2 },
    { fault: { kind: 'sensorFault', channel: 'tankTop', value: 125, share: 1 }, month: 2 },
  ],
  'sensors-swapped': [{ fault: { kind: 'sensorsSwapped' }, month: 6 }],
  'clock-off': [
    { fault: { kind: 'clockOff', minutes: 60 }, month: 6 },
    { fault: { kind: 'clockOff', minutes: -150 }, month: 4 },
    { fault: { kind: 'clockOff', minutes: -60, summerOnly: true }, month: 7 },
  ],
  'log-silent': [
    { fault: { kind: 'logHoles' }, month: 5 },
    { fault: { kind: 'logHoles', everyDays: 2, hours: 6 }, month: 5 },
  ],
  'register-reset': [{ fault: { kind: 'registerReset', channel: 'diversion' }, month: 6 }],
};

/** A case as a fault between two civil dates. */
export function faultOf({ fault }: Case, from: string, to?: string): Fault {
  return { ...fault, from, ...(to === undefined ? {} : { to }) };
}
