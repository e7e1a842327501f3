import { getPosition } from 'suncalc';
import { describe, expect, it } from 'vitest';
import { weatherOf } from '../../../samples/make/sky.ts';
import { beyondAir, clearSky, onPlane, sunAt, sunOfDay } from '../../../samples/make/sun.ts';

describe('the simulated sun', () => {
  it('stands where NREL’s solar position algorithm puts it (NREL/TP-560-34302 table A5.1, references.csv spa)', () => {
    const sun = sunAt(Date.parse('2003-10-17T19:30:30Z'), 39.742476, -105.1786);
    expect(Math.abs(90 - sun.altitude - 50.11162)).toBeLessThan(0.05);
    expect(Math.abs(sun.azimuth - 194.34024)).toBeLessThan(0.05);
  });

  it.each([
    ['London', 51.5074, -0.1278],
    ['Hobart', -42.88, 147.33],
    ['Nairobi', -1.29, 36.82],
  ])('agrees with suncalc in %s through the year', (_name, latitude, longitude) => {
    for (let hour = 0; hour < 8760; hour += 37) {
      const instant = Date.UTC(2025, 0, 1, hour);
      const ours = sunAt(instant, latitude, longitude);
      const theirs = getPosition(new Date(instant), latitude, longitude);
      if (ours.altitude < 5 || ours.altitude > 85) continue;
      expect(Math.abs(ours.altitude - theirs.altitude)).toBeLessThan(0.2);
      const turn = Math.abs(((ours.azimuth - theirs.azimuth + 540) % 360) - 180);
      expect(turn * Math.cos((ours.altitude * Math.PI) / 180)).toBeLessThan(0.2);
    }
  });

  it('yields what SAP’s Appendix U gives for 1 kWp facing south at 30° in Great Britain: year within 8 %, months’ shares within 1.2 points', () => {
    // SAP App. U, UK average, kWh per kWp by month (references.md section 14; U3 row and tilt constants at second hand).
    const sap = [25.0, 41.8, 71.2, 95.4, 117.8, 115.9, 114.3, 99.9, 78.2, 53.4, 29.7, 21.0];
    const months = new Float64Array(12);
    const seeds = Array.from({ length: 24 }, (_, i) => 11 + i);
    const sun = { altitude: 0, azimuth: 0 };
    for (const seed of seeds) {
      for (let day = 20089; day < 20089 + 365; day++) {
        const from = day * 86_400_000;
        const place = sunOfDay(from, from + 86_400_000, 52.4, -1.5);
        const { through, outdoorC } = weatherOf(seed, day, 1440, 52.4);
        for (let minute = 0; minute < 1440; minute += 10) {
          place(from + minute * 60_000, sun);
          if (sun.altitude <= 0) continue;
          const sine = Math.sin((sun.altitude * Math.PI) / 180);
          const plane = onPlane(clearSky(sine) * through[minute], beyondAir(from, sine), sun, 30, 180);
          const watts = plane * 0.85 * (1 - 0.004 * (outdoorC + 3 + 0.028 * plane - 25));
          months[new Date(from).getUTCMonth()] += (watts * 10) / 60_000 / seeds.length;
        }
      }
    }
    const year = months.reduce((a, b) => a + b, 0);
    expect(Math.abs(year / 863.6 - 1)).toBeLessThan(0.08);
    months.forEach((kwh, month) => expect(Math.abs((100 * kwh) / year - (100 * sap[month]) / 863.6)).toBeLessThan(1.2));
  });
});
