import { describe, expect, it } from 'vitest';
import { Cylinder, WATER_WH } from '../../../samples/make/cylinder.ts';

const SHAPE = { litres: 210, uaWPerK: 1.48148, pipeWPerK: 0, slimness: 2.6, layers: 24, conductivity: 1.5 };

function rested(shape: typeof SHAPE, startC: number, hours: number): Cylinder {
  const cylinder = new Cylinder(shape, startC);
  for (let minute = 0; minute < hours * 60; minute++) {
    cylinder.rest(60, 20);
    cylinder.settle();
  }
  return cylinder;
}

describe('the simulated cylinder', () => {
  it('cools as Newton says when it is well mixed (references.csv cool-24: 54.5808 °C after 24 h)', () => {
    const mixed = rested({ ...SHAPE, conductivity: 60 }, 60, 24);
    const mean = mixed.heldWh() / (WATER_WH * 210);
    expect(Math.abs(mean - 54.5808)).toBeLessThan(0.02);
  });

  it('gives its loss back when Newton is turned round (references.csv ua-inv: 60 → 54 °C in 24 h is 1.65383 W/K)', () => {
    const mixed = rested({ ...SHAPE, uaWPerK: 1.65383, conductivity: 60 }, 60, 24);
    const mean = mixed.heldWh() / (WATER_WH * 210);
    const ua = (210 * WATER_WH * Math.log((60 - 20) / (mean - 20))) / 24;
    expect(Math.abs(ua / 1.65383 - 1)).toBeLessThan(0.002);
  });

  it('takes 12.90 K/h from 3 kW in 200 litres (references.csv w-rate)', () => {
    const cylinder = new Cylinder({ ...SHAPE, litres: 200, uaWPerK: 0 }, 10);
    for (let second = 0; second < 3600; second += 10) {
      cylinder.heat((3000 * 10) / 3600, 0, 0.1);
      cylinder.settle();
    }
    expect(cylinder.heldWh() / (WATER_WH * 200) - 10).toBeCloseTo(12.8977, 3);
  });

  it('keeps the energy book to 0.001 % through heat, draw, loss and mixing', () => {
    const cylinder = new Cylinder(SHAPE, 45);
    const before = cylinder.heldWh();
    let heat = 0;
    let drawn = 0;
    let lost = 0;
    for (let step = 0; step < 6 * 60 * 24 * 3; step++) {
      if (step % 900 < 200) {
        cylinder.heat(8, 0.12, 0.2);
        heat += 8;
      }
      if (step % 1100 < 40) drawn += cylinder.draw(1.25, 11);
      if (step % 6 === 0) lost += cylinder.rest(60, 20);
      cylinder.settle();
    }
    const change = cylinder.heldWh() - before;
    expect(Math.abs(heat - drawn - lost - change) / heat).toBeLessThan(1e-5);
  });

  it('is never warmer below than above once it has settled, and heat from below leaves the water beneath it cold', () => {
    const cylinder = new Cylinder(SHAPE, 15);
    for (let step = 0; step < 360; step++) {
      cylinder.heat(8, 0.25, 0.3);
      if (step % 6 === 0) cylinder.rest(60, 20);
      cylinder.settle();
    }
    for (let i = 1; i < cylinder.temps.length; i++)
      expect(cylinder.temps[i]).toBeGreaterThanOrEqual(cylinder.temps[i - 1]);
    expect(cylinder.at(0.05)).toBeLessThan(18);
    expect(cylinder.at(0.9)).toBeGreaterThan(25);
  });

  it('delivers hot water until the cold front comes up, not a falling mixture', () => {
    const cylinder = new Cylinder(SHAPE, 60);
    for (let litre = 0; litre < 105; litre++) cylinder.draw(1, 10);
    expect(cylinder.at(1)).toBeGreaterThan(59);
    expect(cylinder.at(0.1)).toBeLessThan(12);
  });
});
