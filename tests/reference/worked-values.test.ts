import { describe, expect, it } from 'vitest';
import { BOILER_KINDS } from '../../shared/energy/boilers.ts';
import { carbonFactors } from '../../shared/energy/carbon.ts';
import { coldFeedC, litresAt40, WATER_WH_PER_LITRE_K } from '../../shared/energy/water.ts';
import { CUBIC_FOOT_M3, gasKwh, gasM3, toBase } from '../../shared/units/convert.ts';
import { zoneOf } from '../../shared/time/zone.ts';

/** Published or independently computed values; each row names its source and how it was come by. */
const near = (value: number, expected: number, tolerance: number): void =>
  expect(Math.abs(value - expected)).toBeLessThanOrEqual(tolerance);

const summer = (id: string): number => BOILER_KINDS.find((kind) => kind.id === id)?.summer ?? NaN;

describe('gas by volume', () => {
  // GB billing practice; Gas (Calculation of Thermal Energy) Regulations 1996 (SI 1996/439), read at second hand.
  it.each([
    [1, 39.5, 11.220633, 1e-6],
    [1, 38, 10.7945, 1e-4],
    [1, 41, 11.6467, 1e-4],
    [100, 39.2, 1113.541, 1e-3],
  ])('%d m³ at %d MJ/m³ are %d kWh', (m3, cv, kwh, tolerance) => {
    near(gasKwh(m3, cv), kwh, tolerance);
    near(gasM3(kwh, cv), m3, 1e-6 * m3 + 1e-5);
  });

  it('100 ft³ are 2.8316847 m³ and 31.77330 kWh at 39.5 MJ/m³ (0.3048³ exact, computed)', () => {
    near(toBase('ft3x100').factor, 2.8316847, 1e-7);
    near(gasKwh(toBase('ft3x100').factor, 39.5), 31.7733, 1e-5);
    near(toBase('ft3').factor * 100, 2.83168, 1e-5);
    expect(CUBIC_FOOT_M3).toBe(0.3048 ** 3);
  });

  it('one hundred cubic feet as bills round them (2.83) at 39.47333 MJ/m³ are 31.73 kWh (published example, second-hand)', () => {
    near(gasKwh(2.83, 39.47333), 31.73295, 0.005);
  });
});

describe('water', () => {
  // IAPWS-IF97 at 101.325 kPa through Debian's python3-iapws 1.5.3: density kg/m³, heat capacity kJ/(kg·K).
  it.each([
    [10, 999.7015, 4.19545],
    [25, 997.048, 4.1819],
    [60, 983.2106, 4.18276],
  ])('the constant is within 2 %% of IF97 at %d °C', (_, density, heat) => {
    expect(Math.abs(WATER_WH_PER_LITRE_K / ((density / 1000) * (heat / 3.6)) - 1)).toBeLessThan(0.02);
  });

  it('200 litres from 10 to 60 °C take 11.6300 kWh, 0.14 % from IF97 for a cold fill (11.6134)', () => {
    const kwh = (WATER_WH_PER_LITRE_K * 200 * 50) / 1000;
    near(kwh, 11.63, 1e-4);
    near(kwh / 11.6134 - 1, 0.0014, 1e-4);
    near((kwh / 3) * 60, 232.6, 0.01);
    near(3000 / (WATER_WH_PER_LITRE_K * 200), 12.8977, 1e-3);
  });

  // Mixing balance; the first is a published example, the second computed from the named formula.
  it.each([
    [120, 54, 15, 187.2],
    [200, 60, 10, 333.333],
  ])('%d l at %d °C with cold at %d °C make %d l at 40 °C', (litres, hot, cold, expected) => {
    const kwh = (WATER_WH_PER_LITRE_K * litres * (hot - cold)) / 1000;
    near(litresAt40(kwh, cold) ?? NaN, expected, 1e-3);
  });

  it('litres at 40 °C are unknown where the cold feed is within 5 K of them', () => {
    expect(litresAt40(1, 35)).toBeNull();
    expect(litresAt40(1, 34.9)).not.toBeNull();
  });

  it('cold feed by month has the mean 13.03 °C and is six months later in the south (SAP 10.2 Table J1, from memory)', () => {
    const months = Array.from({ length: 12 }, (_, i) => coldFeedC(i + 1, 52));
    near(months.reduce((a, b) => a + b) / 12, 13.03, 0.03);
    expect(coldFeedC(1, 52)).toBe(8);
    expect(coldFeedC(7, -35)).toBe(8);
    expect(coldFeedC(1, -35)).toBe(coldFeedC(7, 52));
  });

  it('cold feed gives back a published worksheet of baths, litres a day (SAP 10.2 J6 to J8, N 2.1468)', () => {
    const baths = (cold: number, behaviour: number): number =>
      ((0.13 * 2.1468 + 0.19) * 73 * behaviour * (42 - cold)) / (52 - cold);
    near(baths(coldFeedC(1, 52), 1.035), 27.3868, 1e-3);
    near(baths(coldFeedC(7, 52), 0.965), 23.21, 1e-3);
  });
});

describe('fuel and carbon', () => {
  it('1000 kWh diverted displace 1216.216 kWh of gas (SAP 10.2 G4 and Table 4b code 102, summer; second-hand)', () => {
    near((1000 * 0.9) / summer('condensing-regular'), 1216.216, 1e-3);
    near(1000 / summer('condensing-regular'), 1351.351, 1e-3);
  });

  it('which is 222.519 kg of carbon, 45.519 kg net of the export given up (DESNZ 2025, second-hand)', () => {
    const factors = carbonFactors('GB', 2025, 'gas');
    near(1216.216 * (factors?.fuel ?? NaN), 222.519, 1e-3);
    near(1216.216 * (factors?.fuel ?? NaN) - 1000 * (factors?.electricity ?? NaN), 45.519, 1e-3);
  });

  it('factors are those of the reporting year, else the latest earlier ones, else none', () => {
    expect(carbonFactors('GB', 2023, 'gas')).toMatchObject({ fuel: 0.18293, electricity: 0.207074, year: 2023 });
    expect(carbonFactors('GB', 2024, 'oil')).toMatchObject({ fuel: 0.24677, electricity: 0.20705, year: 2024 });
    expect(carbonFactors('GB', 2031, 'lpg')).toMatchObject({ fuel: 0.2145, year: 2025 });
    expect(carbonFactors('GB', 2022, 'gas')).toBeNull();
    expect(carbonFactors('AU', 2025, 'gas')).toBeNull();
    expect(carbonFactors(null, 2025, 'gas')).toBeNull();
    expect(carbonFactors('GB', 2025, 'none')).toBeNull();
  });
});

describe('days of the clock change', () => {
  // Directive 2000/84/EC; SI 2002/262; the GB settlement code, read in the primary text.
  it.each([
    ['2026-03-29', 23, '2026-03-29T00:00:00Z', '2026-03-29T23:00:00Z'],
    ['2026-10-25', 25, '2026-10-24T23:00:00Z', '2026-10-26T00:00:00Z'],
    ['2026-06-21', 24, '2026-06-20T23:00:00Z', '2026-06-21T23:00:00Z'],
  ])('%s in London has %d hours', (date, hours, start, end) => {
    expect(zoneOf('Europe/London').dayBounds(date)).toEqual({ start: Date.parse(start), end: Date.parse(end), hours });
  });
});
