import { describe, expect, it } from 'vitest';
import type { Fault } from '../../../samples/make/faults.ts';
import { like, TYPICAL } from '../../../samples/make/home.ts';
import { measure } from '../../../samples/make/measure.ts';
import { simulate, type TrueDay } from '../../../samples/make/simulate.ts';

const sum = (days: TrueDay[], name: 'litres' | 'fuel' | 'heater' | 'fuelHeat' | 'draw' | 'loss' | 'store'): number =>
  days.reduce((total, day) => total + day[name], 0);

describe('the simulated home', () => {
  const run = simulate(TYPICAL, '2025-03-01', '2025-06-01');

  it('keeps the energy book of every day: heat in = draw + loss + change of store, within 0.1 %', () => {
    for (const day of run.days) {
      const heat = day.heater + day.fuelHeat;
      expect(Math.abs(heat - day.draw - day.loss - day.store)).toBeLessThan(0.001 * Math.max(1, heat));
    }
  });

  it('keeps the electrical book of every day: panels + import = load + heater + export', () => {
    for (const day of run.days)
      expect(day.generation + day.import - day.load - day.heater - day.export).toBeCloseTo(0, 5);
  });

  it('draws about as much hot water a day as was measured in 120 English homes (EST/Defra 2008: mean 122 litres)', () => {
    const year = simulate(TYPICAL, '2024-07-01', '2025-07-01');
    const litres = sum(year.days, 'litres') / year.days.length;
    expect(litres).toBeGreaterThan(100);
    expect(litres).toBeLessThan(130);
  }, 30_000);

  it('gives the same day whenever the simulation started, once the store has forgotten its beginning', () => {
    const later = simulate(TYPICAL, '2025-05-10', '2025-06-01');
    const a = run.days.find((day) => day.date === '2025-05-25');
    const b = later.days.find((day) => day.date === '2025-05-25');
    expect(b?.generation).toBe(a?.generation);
    expect(b?.load).toBe(a?.load);
    expect(Math.abs((b?.diverted ?? 0) - (a?.diverted ?? 9))).toBeLessThan(0.02);
  });

  it('takes V²/R at full power (references.csv imm-R: 3 kW at 240 V is 19.2 Ω)', () => {
    const boosted = simulate(like(TYPICAL, { boosts: [{ start: '02:00', end: '02:30' }] }), '2025-01-10', '2025-01-12');
    const most = boosted.flow.lower.reduce((a, b) => Math.max(a, b), 0);
    expect(most).toBeGreaterThan(235 ** 2 / 19.2);
    expect(most).toBeLessThan(247 ** 2 / 19.2);
  });

  it('loses sun to a backup that runs in the morning, and none to one that waits', () => {
    const early: Fault[] = [{ kind: 'backupBeforeSun', from: '2025-05-01', start: '05:00', end: '07:30', targetC: 60 }];
    const late = simulate(TYPICAL, '2025-05-01', '2025-06-01');
    const soon = simulate(TYPICAL, '2025-05-01', '2025-06-01', early);
    const missed = (days: TrueDay[]): number => days.reduce((total, day) => total + day.missedSun, 0);
    expect(missed(late.days)).toBeLessThan(3);
    expect(missed(soon.days)).toBeGreaterThan(10);
    for (const day of soon.days) {
      expect(day.missedSun).toBeGreaterThan(-0.05);
      expect(day.missedSun).toBeLessThan(day.export + 0.05);
      // A cooler store may also close the heater's thermostat once more: 5 K of the 170 litres above it, 1 kWh.
      expect(day.missedSun).toBeLessThan(day.fuelHeat + 1.0);
    }
  });

  it('saves no more fuel than the heat that the sun put in, and not much less', () => {
    const without = simulate(TYPICAL, '2025-03-01', '2025-06-01', [], { divert: false });
    const saved = sum(without.days, 'fuel') - sum(run.days, 'fuel');
    const heat = run.days.reduce((total, day) => total + day.diverted, 0);
    expect(saved * 0.74).toBeLessThan(heat * 1.02);
    expect(saved * 0.74).toBeGreaterThan(heat * 0.75);
  });

  it('turns round the year and the panels in the south', () => {
    const south = like(TYPICAL, {
      timeZone: 'Australia/Hobart',
      latitude: -42.88,
      longitude: 147.33,
      panels: [{ kwp: 3.9, tilt: 30, azimuth: 0 }],
    });
    const mean = (from: string, to: string): number => {
      const { days } = simulate(south, from, to);
      return days.reduce((total, day) => total + day.generation, 0) / days.length;
    };
    expect(mean('2025-01-01', '2025-01-31')).toBeGreaterThan(2 * mean('2025-06-01', '2025-07-01'));
  });
});

describe('faults of a simulated home', () => {
  const from = '2025-06-10';
  const totals = (faults: Fault[], home = TYPICAL) => {
    const run = simulate(home, '2025-06-10', '2025-06-24', faults);
    const total = (name: keyof TrueDay): number => run.days.reduce((all, day) => all + (day[name] as number), 0);
    return { run, measured: measure(run), total };
  };
  const healthy = totals([]);
  const mean = (values: Float64Array = new Float64Array()): number => values.reduce((a, b) => a + b, 0) / values.length;

  it('a dead clamp stops the diverter; what its own clamp logs of export is nothing, what a meter logs is more', () => {
    const dead = totals([{ kind: 'clampDead', from }]);
    expect(dead.total('heater')).toBe(0);
    expect(mean(dead.measured.channels.export)).toBeGreaterThan(1.2 * mean(healthy.measured.channels.export));
    const own = totals([{ kind: 'clampDead', from }], like(TYPICAL, { meters: { exportBy: 'diverterClamp' } }));
    expect(mean(own.measured.channels.export)).toBe(0);
  });

  it('a reversed clamp heats in the dark and from the grid', () => {
    const { run } = totals([{ kind: 'clampReversed', from }]);
    expect(run.days.reduce((all, day) => all + day.bought, 0)).toBeGreaterThan(5);
    const night = run.flow.lower.filter((watts, i) => run.flow.panels[i] === 0 && watts > 500);
    expect(night.length).toBeGreaterThan(30);
  });

  it('an open heater, a diverter switched off and a weak element do what they say', () => {
    expect(totals([{ kind: 'heaterOpen', from }]).total('heater')).toBe(0);
    expect(totals([{ kind: 'diverterOff', from }]).total('heater')).toBe(0);
    const weak = totals([{ kind: 'heaterWeak', share: 0.5, from }]);
    expect(weak.run.flow.lower.reduce((a, b) => Math.max(a, b), 0)).toBeLessThan(1700);
  });

  it('a stuck relay heats day and night, one that never calls not at all, one without heat shows its call', () => {
    const stuck = totals([{ kind: 'relayStuck', shown: true, from }]);
    expect(mean(stuck.measured.channels.relay)).toBe(1);
    expect(stuck.total('fuelHeat')).toBeGreaterThan(2 * healthy.total('fuelHeat'));
    const dull = (faults: Fault[]) => simulate(TYPICAL, '2025-01-05', '2025-01-12', faults);
    const never = dull([{ kind: 'relayNeverCalls', from: '2025-01-01' }]);
    expect(never.days.reduce((all, day) => all + day.fuelHeat, 0)).toBe(0);
    const cold = dull([{ kind: 'relayNoHeat', from: '2025-01-01' }]);
    expect(cold.flow.relay.some((on) => on === 1)).toBe(true);
    expect(cold.days.reduce((all, day) => all + day.fuelHeat, 0)).toBe(0);
  });

  it('a welded thermostat overheats the store; missing lagging doubles its loss; an early thermostat ends the diversion', () => {
    const hot = totals([{ kind: 'overheat', celsius: 86, from }]);
    expect(Math.max(...(hot.measured.channels.tankTop ?? []))).toBeGreaterThan(75);
    expect(totals([{ kind: 'lossHigh', factor: 2.5, from }]).total('loss')).toBeGreaterThan(
      1.7 * healthy.total('loss'),
    );
    const early = totals([{ kind: 'thermostatLow', which: 'heater', celsius: 46, from }]);
    expect(early.total('diverted')).toBeLessThan(0.8 * healthy.total('diverted'));
  });

  it('faults of meters and loggers leave what happened alone and spoil only the log', () => {
    const faults: Fault[] = [
      { kind: 'scaleWrong', channel: 'diversion', factor: 2, from },
      { kind: 'sensorFault', channel: 'tankTop', value: -127, share: 0.2, from, to: '2025-06-12' },
      { kind: 'exportReversed', from: '2025-06-15' },
      { kind: 'logHoles', everyDays: 2, hours: 5, from: '2025-06-20' },
      { kind: 'registerReset', channel: 'gas', from: '2025-06-18' },
    ];
    const spoilt = totals(faults);
    expect(spoilt.run.days).toEqual(healthy.run.days);
    const { channels, resets } = spoilt.measured;
    const plain = healthy.measured.channels;
    expect(channels.diversion?.[13 * 60]).toBe(2 * (plain.diversion?.[13 * 60] ?? NaN));
    expect(channels.tankTop?.subarray(0, 2880).filter((v) => v === -127).length).toBeGreaterThan(400);
    expect(channels.tankTop?.subarray(2880).some((v) => v === -127)).toBe(false);
    expect(channels.export?.[6 * 1440 + 100]).toBe(plain.import?.[6 * 1440 + 100]);
    expect(channels.import?.filter(Number.isNaN).length).toBe(2 * 300);
    expect(resets.gas).toEqual([8 * 1440]);
  });

  it('a clock that is 60 minutes ahead stamps noon with one o’clock', () => {
    const ahead = totals([{ kind: 'clockOff', minutes: 60, from }]);
    const plain = healthy.measured.channels.generation ?? new Float64Array();
    expect(ahead.measured.channels.generation?.[4 * 1440 + 780]).toBe(plain[4 * 1440 + 720]);
  });
});
