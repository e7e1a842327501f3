import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { DatedSystem } from '../../../../shared/api/property.ts';
import { BOILER_KINDS } from '../../../../shared/energy/boilers.ts';
import { DAYS } from '../../../../src/components/records/week.ts';
import { issuesFromServer, messageAt } from '../../../../src/components/records/issues.ts';
import {
  emptySystemForm,
  fromSystem,
  parseDirection,
  systemLabel,
  toSystem,
} from '../../../../src/components/records/system-form.ts';

const step = (min: number, max: number, by: number): fc.Arbitrary<number> =>
  fc.integer({ min: Math.round(min / by), max: Math.round(max / by) }).map((n) => Number((n * by).toFixed(6)));
const CALORIFIC: Record<'gas' | 'lpg' | 'oil', [number, number]> = { gas: [20, 60], lpg: [5, 10], oil: [8, 13] };
const maybe = <T>(arbitrary: fc.Arbitrary<T>): fc.Arbitrary<T | undefined> => fc.option(arbitrary, { nil: undefined });
const clock = fc
  .integer({ min: 0, max: 1439 })
  .map((m) => `${String(Math.floor(m / 60)).padStart(2, '0')}:${String(m % 60).padStart(2, '0')}`);
const strip = (value: unknown): unknown => JSON.parse(JSON.stringify(value));

const record = fc
  .record({
    from: fc.constantFrom('2019-02-28', '2024-02-29', '2026-12-31'),
    cylinder: fc.record({
      volumeLitres: step(20, 2000, 0.5),
      declaredLossKwhPerDay: maybe(step(0.01, 50, 0.01)),
      insulation: maybe(fc.record({ kind: fc.constantFrom('foam', 'jacket'), mm: step(0, 300, 1) })),
      sensors: maybe(
        fc
          .subarray(['tankTop', 'tankMiddle', 'tankBottom'] as const, { minLength: 1 })
          .chain((channels) =>
            fc.tuple(
              ...channels.map((channel) =>
                fc.record({ channel: fc.constant(channel), height: maybe(step(0, 1, 0.01)) }),
              ),
            ),
          ),
      ),
    }),
    heaters: maybe(
      fc.array(
        fc.record({
          ratedKw: step(0.1, 30, 0.1),
          ratedVolts: maybe(step(100, 480, 1)),
          position: fc.constantFrom('lower', 'upper'),
          thermostatC: maybe(step(20, 95, 0.5)),
          viaDiverter: fc.boolean(),
        }),
        { minLength: 1, maxLength: 4 },
      ),
    ),
    boiler: fc.oneof(
      fc.constant({ fuel: 'none' }),
      ...(['gas', 'lpg', 'oil'] as const).map((fuel) =>
        fc.record({
          fuel: fc.constant(fuel),
          kind: maybe(
            fc.constantFrom(...BOILER_KINDS.filter((kind) => kind.fuels.includes(fuel)).map((kind) => kind.id)),
          ),
          efficiency: maybe(step(0.3, 1.1, 0.001)),
          calorificValue: maybe(step(...CALORIFIC[fuel], 0.01)),
          ratedKw: maybe(step(1, 200, 0.1)),
        }),
      ),
    ),
    panels: maybe(
      fc.array(
        fc.record({
          kwp: step(0.1, 200, 0.01),
          tiltDegrees: maybe(step(0, 90, 1)),
          azimuthDegrees: maybe(step(0, 360, 1)),
        }),
        { minLength: 1, maxLength: 8 },
      ),
    ),
    exportLimitKw: maybe(step(0, 1000, 0.01)),
    battery: maybe(fc.boolean()),
    phases: maybe(fc.constantFrom(1, 2, 3)),
    gasMeterCovers: maybe(fc.constantFrom('hotWater', 'boiler', 'house')),
    relay: maybe(
      fc.record({
        targetC: step(20, 95, 1),
        windows: maybe(
          fc.array(
            fc.record({
              days: maybe(fc.subarray(['mon', 'tue', 'wed', 'sat', 'sun'] as const, { minLength: 1 })),
              start: clock,
              end: fc.oneof(clock, fc.constant('24:00')),
            }),
            {
              minLength: 1,
              maxLength: 12,
            },
          ),
        ),
      }),
    ),
    exportLoggedBy: maybe(fc.constantFrom('ownMeter', 'diverterClamp', 'unknown')),
    diversionIs: maybe(fc.constantFrom('metered', 'estimated')),
    diverterSince: maybe(fc.constantFrom('2020-01-01', '2025-06-30')),
    occupants: maybe(step(0, 50, 1)),
    hygieneC: maybe(step(45, 80, 1)),
  })
  .map(strip);

describe('the form of the system record', () => {
  it('shows and gives back every record that the API allows, unchanged', () => {
    fc.assert(
      fc.property(record, (raw) => {
        const system = DatedSystem.parse(raw);
        const back = toSystem(fromSystem(system));
        expect(back.issues).toEqual([]);
        expect(back.system).toEqual(system);
      }),
      { numRuns: 500 },
    );
  });

  it('needs no more than a date, a volume and a fuel, and sends nothing that was left empty', () => {
    const form = { ...emptySystemForm('2026-03-01'), volumeLitres: '210' };
    expect(toSystem(form)).toEqual({
      system: { from: '2026-03-01', cylinder: { volumeLitres: 210 }, boiler: { fuel: 'gas' } },
      issues: [],
    });
  });

  it('tells everything that is wrong at once, by the API’s paths', () => {
    const form = {
      ...emptySystemForm('soon'),
      volumeLitres: '',
      insulationKind: 'foam' as const,
      heaters: [
        { ratedKw: 'three', ratedVolts: '', position: 'lower' as const, thermostatC: '200', viaDiverter: true },
      ],
    };
    expect(toSystem(form).issues.map((issue) => issue.path)).toEqual([
      'from',
      'cylinder.insulation.mm',
      'cylinder.volumeLitres',
      'heaters.0.ratedKw',
      'heaters.0.thermostatC',
    ]);
  });

  it('takes what people type', () => {
    const form = {
      ...emptySystemForm('1.3.2026'),
      volumeLitres: '1,234 litres',
      declaredLoss: '1,8 kWh/24h',
      efficiency: '85,5 %',
      efficiencyIs: 'hotWater' as const,
      relayWindows: [{ days: [...DAYS], start: '5.30 pm', end: 'midnight' }],
      panels: [{ kwp: '4,2 kWp', tiltDegrees: '35°', azimuthDegrees: 'south-west' }],
    };
    const { system, issues } = toSystem(form);
    expect(issues).toEqual([]);
    expect(DatedSystem.parse(system)).toEqual({
      from: '2026-03-01',
      cylinder: { volumeLitres: 1234, declaredLossKwhPerDay: 1.8 },
      boiler: { fuel: 'gas', efficiency: 0.855, efficiencyIs: 'hotWater' },
      relay: { windows: [{ start: '17:30', end: '24:00' }] },
      panels: [{ kwp: 4.2, tiltDegrees: 35, azimuthDegrees: 225 }],
    });
  });
});

describe('parseDirection', () => {
  // The sixteen points of the compass, 22.5° apart from north through east.
  it.each([
    ['south', 180],
    ['SSW', 202.5],
    ['north-west', 315],
    ['E', 90],
    ['200', 200],
    ['200°', 200],
  ])('reads %s', (text, expected) => expect(parseDirection(text)).toEqual({ ok: true, value: expected }));
  it('refuses what is no direction', () => expect(parseDirection('up').ok).toBe(false));
});

describe('what the server found', () => {
  it('lands beside the field it names', () => {
    const issues = issuesFromServer(
      [{ path: 'body.system.heaters[0].ratedKw', message: 'too small' }],
      systemLabel,
      'system',
    );
    expect(issues).toEqual([{ path: 'heaters.0.ratedKw', label: 'Heater rating', message: 'too small' }]);
    expect(messageAt(issues, 'heaters.0.ratedKw')).toBe('too small');
    expect(messageAt(issues, 'heaters.1.ratedKw')).toBeUndefined();
  });
});
