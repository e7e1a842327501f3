import { mount } from '@vue/test-utils';
import { describe, expect, it } from 'vitest';
import CylinderDrawing from '../../../../src/components/cylinder/CylinderDrawing.vue';
import type { CylinderModel, HeatSources } from '../../../../src/components/cylinder/section.ts';

const SENSORS = [
  { channel: 'tankTop', height: 0.85, assumed: false, c: 58 },
  { channel: 'tankMiddle', height: 0.5, assumed: false, c: 47 },
  { channel: 'tankBottom', height: 0.15, assumed: false, c: 31 },
] as const;

function draw(count: number, heat: HeatSources | null = { sun: 20, fuel: 10, bought: 0 }, over = {}) {
  const model: CylinderModel = {
    volumeLitres: 210,
    heaters: [{ position: 'lower', viaDiverter: true }],
    coil: true,
    sensors: SENSORS.slice(0, count),
    readyC: 50,
    ...over,
  };
  return mount(CylinderDrawing, { props: { model, heat, when: 'at 18:00' } });
}
const layers = (wrapper: ReturnType<typeof draw>) => wrapper.findAll('.drawing__layer');

describe('the cylinder in section', () => {
  it.each([
    [0, 0, 1],
    [1, 1, 1],
    [2, 2, 1],
    [3, 3, 0],
  ])('with %s sensors tints %s layers and hatches %s', (count, tinted, hatched) => {
    // Two sensors at top and middle leave the bottom unmeasured.
    const all = layers(draw(count));
    expect(all.filter((layer) => !layer.classes('is-unmeasured'))).toHaveLength(tinted);
    expect(all.filter((layer) => layer.classes('is-unmeasured'))).toHaveLength(hatched);
  });

  it('tints hotter layers more strongly', () => {
    const strength = layers(draw(3)).map((layer) => Number(layer.attributes('fill-opacity')));
    expect(strength[0]).toBeGreaterThan(strength[1]);
    expect(strength[1]).toBeGreaterThan(strength[2]);
  });

  it('sets the gauge in proportion to the heat of each source', () => {
    const wrapper = draw(3);
    const height = (kind: string) => Number(wrapper.get(`.drawing__part.is-${kind}`).attributes('height'));
    expect(height('sun') / height('fuel')).toBeCloseTo(2, 6);
    expect(wrapper.find('.drawing__part.is-unknown').exists()).toBe(false);
  });

  it('shows fuel that is not known as an open hatched end, not as nothing', () => {
    const wrapper = draw(1, { sun: 20, fuel: null, bought: null });
    expect(wrapper.find('.drawing__part.is-unknown').exists()).toBe(true);
    expect(wrapper.find('.drawing__part.is-fuel').exists()).toBe(false);
  });

  it('marks the ready temperature by a notch on its scale, and leaves the scale out without sensors', () => {
    expect(draw(1).text()).toMatch(/ready 50\s°C/);
    expect(draw(0).find('.drawing__notch').exists()).toBe(false);
  });

  it('carries its words as its accessible name', () => {
    const wrapper = draw(2);
    const svg = wrapper.get('svg[role="img"]');
    const title = wrapper.get(`[id="${svg.attributes('aria-labelledby')}"]`);
    expect(title.text()).toMatch(/Temperatures at 18:00: top 58\s°C, middle 47\s°C/);
  });

  it('draws a coil only where a boiler heats the cylinder', () => {
    expect(draw(1).find('.drawing__coil').exists()).toBe(true);
    expect(draw(1, null, { coil: false }).find('.drawing__coil').exists()).toBe(false);
  });

  it('as a glyph is decoration, hidden from screen readers', () => {
    const wrapper = mount(CylinderDrawing, {
      props: {
        model: { volumeLitres: 120, heaters: [], coil: false, sensors: [], readyC: 50 },
        when: '',
        glyph: true,
      },
    });
    expect(wrapper.get('svg').attributes('aria-hidden')).toBe('true');
  });
});
