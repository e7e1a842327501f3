import { describe, expect, it } from 'vitest';
import {
  cylinderWords,
  gaugeParts,
  gaugeScale,
  layersOf,
  sensorsOf,
  slenderness,
} from '../../../../src/components/cylinder/section.ts';
import type { CylinderModel } from '../../../../src/components/cylinder/section.ts';

const sensor = (height: number, c: number | null) => ({ channel: 'tankTop' as const, height, assumed: false, c });
const model = (sensors: CylinderModel['sensors']): CylinderModel => ({
  volumeLitres: 210,
  heaters: [{ position: 'lower', viaDiverter: true }],
  coil: true,
  sensors,
  readyC: 50,
});
const measured = (layers: ReturnType<typeof layersOf>): number =>
  layers.filter((layer) => layer.c !== null).reduce((sum, layer) => sum + layer.to - layer.from, 0);

describe('layersOf', () => {
  it('with no sensor everything is unmeasured', () => {
    expect(layersOf([])).toEqual([{ from: 0, to: 1, c: null }]);
  });
  it('a sensor without a reading shows nothing', () => {
    expect(layersOf([sensor(0.85, null)])).toEqual([{ from: 0, to: 1, c: null }]);
  });
  it('one sensor at the top speaks for the top, not for the rest', () => {
    const layers = layersOf([sensor(0.85, 55)]);
    expect(layers[0]).toEqual({ from: 0.85 - 0.2, to: 1, c: 55 });
    expect(layers[1]).toEqual({ from: 0, to: 0.85 - 0.2, c: null });
  });
  it('one sensor low down says nothing of the water above its reach', () => {
    const layers = layersOf([sensor(0.2, 30)]);
    expect(layers[0]).toMatchObject({ to: 1, c: null });
    expect(layers[1]).toMatchObject({ from: 0, c: 30 });
  });
  it('two sensors leave a hatched stretch between them', () => {
    const layers = layersOf([sensor(0.15, 30), sensor(0.85, 55)]);
    expect(layers.map((layer) => layer.c)).toEqual([55, null, 30]);
  });
  it('three sensors at the usual heights cover the whole', () => {
    const layers = layersOf([sensor(0.85, 55), sensor(0.5, 45), sensor(0.15, 30)]);
    expect(layers.map((layer) => layer.c)).toEqual([55, 45, 30]);
    expect(measured(layers)).toBeCloseTo(1, 9);
  });
  it('neighbours that sit close meet half-way', () => {
    const [top, next] = layersOf([sensor(0.8, 55), sensor(0.7, 50)]);
    expect(top.from).toBeCloseTo(0.75, 9);
    expect(next.to).toBeCloseTo(0.75, 9);
  });
  it('the slices always fill the cylinder from top to bottom without overlap', () => {
    for (const heights of [[], [0.1], [0.5], [1], [0], [0.9, 0.1], [0.6, 0.5, 0.4], [0.95, 0.9, 0.85]]) {
      const layers = layersOf(heights.map((height) => sensor(height, 40)));
      expect(layers[0].to).toBe(1);
      expect(layers[layers.length - 1].from).toBe(0);
      layers.slice(1).forEach((layer, i) => expect(layer.to).toBeCloseTo(layers[i].from, 12));
    }
  });
});

describe('sensorsOf', () => {
  it('takes recorded heights, and says where a height is assumed', () => {
    const system = { cylinder: { volumeLitres: 210, sensors: [{ channel: 'tankTop' as const, height: 0.7 }] } };
    const sensors = sensorsOf(system, { tankTop: 51, tankBottom: 30 });
    expect(sensors.map(({ channel, assumed, c }) => ({ channel, assumed, c }))).toEqual([
      { channel: 'tankTop', assumed: false, c: 51 },
      { channel: 'tankBottom', assumed: true, c: 30 },
    ]);
    expect(sensors[0].height).toBe(0.7);
  });
  it('a recorded sensor without a reading is there, unread', () => {
    const system = { cylinder: { volumeLitres: 210, sensors: [{ channel: 'tankMiddle' as const }] } };
    expect(sensorsOf(system, {})).toMatchObject([{ channel: 'tankMiddle', c: null }]);
  });
});

describe('the drawing’s proportions and gauge', () => {
  it('small cylinders are squat, large ones slender, never beyond three to one', () => {
    expect(slenderness(80)).toBe(2);
    expect(slenderness(120)).toBeLessThan(slenderness(210));
    expect(slenderness(400)).toBe(3);
  });
  it('heat that is not known has no size', () => {
    expect(gaugeParts({ sun: 5, fuel: null, bought: 0 })).toEqual([{ kind: 'sun', kwh: 5 }]);
  });
  it.each([
    [0, 0.25],
    [0.11, 0.25],
    [1, 0.25],
    [46.9, 20],
    [100, 50],
  ])('a total of %s kWh lies within a round scale', (total) => {
    const { top, step } = gaugeScale(total);
    expect(top).toBeGreaterThanOrEqual(total);
    expect(top / step).toBeLessThanOrEqual(4 + 1e-9);
    expect(String(step)).toMatch(/^(0\.0*)?[125]0*$/);
  });
});

describe('cylinderWords', () => {
  const heat = { sun: 23.4, fuel: 12, bought: 0 };
  it('names temperatures, ready temperature, hatching and sources', () => {
    const words = cylinderWords(model([sensor(0.85, 55.4)]), heat, 'on Sunday at 18:00');
    expect(words).toContain('210 litres');
    expect(words).toContain('on Sunday at 18:00: top 55');
    expect(words).toContain('needs 50');
    expect(words).toContain('Hatched parts are not measured');
    expect(words).toMatch(/sun 23\.4\skWh, fuel 12\.0\skWh/);
  });
  it('without a sensor it says that the temperature is not shown', () => {
    expect(cylinderWords(model([]), null, 'now')).toContain('no temperature sensor');
  });
  it('without readings it says so', () => {
    expect(cylinderWords(model([sensor(0.85, null)]), null, 'in the week')).toContain('No temperature was logged');
  });
  it('heat that is not known is said, not left out', () => {
    expect(cylinderWords(model([]), { sun: 3, fuel: null, bought: null }, 'now')).toContain(
      'What the fuel put in is not known',
    );
  });
});
