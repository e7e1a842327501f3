import { defineComponent, h } from 'vue';
import { mount } from '@vue/test-utils';
import { describe, expect, it } from 'vitest';
import type { Day } from '../../../../shared/api/day.ts';
import FigureValue from '../../../../src/components/common/FigureValue.vue';
import WorkingSlip from '../../../../src/components/common/WorkingSlip.vue';
import { provideSlip } from '../../../../src/composables/useSlip.ts';
import { day } from '../composables/day.ts';

const plain = (text: string): string =>
  text
    .replace(/\u00a0/g, ' ')
    .replace(/\s+/g, ' ')
    .trim();

/** A figure with the slip that a press on it opens. */
function page(shown: Day, figure: 'divertedKwh' | 'netSaving' | 'solarFraction' | 'surplusCaught') {
  const context = { currency: 'GBP', property: null };
  return mount(
    defineComponent(() => {
      const { slip, close } = provideSlip();
      return () => [
        h(FigureValue, { figure, day: shown, about: 'Monday', context }),
        h(WorkingSlip, { slip: slip.value, onClose: close }),
      ];
    }),
    { attachTo: document.body },
  );
}

describe('a figure', () => {
  it('is read with its name, what it rests on, and its unit', () => {
    const text = plain(
      page(day('2026-11-23', { divertedKwh: 4.5, rests: { divertedKwh: 'measured' } }), 'divertedKwh')
        .get('button')
        .text(),
    );
    expect(text).toBe('Diverted: measured, 4.50 kWh, show the working');
  });
  it('that is not known says so', () => {
    expect(page(day('2026-11-23'), 'divertedKwh').get('button').text()).toContain('not known');
  });

  it('opens a slip with the formula, the numbers put in, the range and the coverage', async () => {
    const wrapper = page(
      day('2026-11-23', {
        heaterKwh: 5,
        boughtHeatKwh: 0.5,
        divertedKwh: 4.5,
        coverage: { diversion: 0.97, import: 1, export: 1 },
        rests: { divertedKwh: 'workedOut' },
        ranges: { divertedKwh: [4.2, 4.8] },
      }),
      'divertedKwh',
    );
    await wrapper.get('button').trigger('click');
    const slip = wrapper.get('dialog');
    expect(slip.attributes('open')).toBeDefined();
    const text = plain(slip.text());
    expect(text).toContain('heater 5.00 kWh − bought heat 0.50 kWh = 4.50 kWh');
    expect(text).toContain('4.20 kWh to 4.80 kWh');
    expect(text).toContain('Diversion 97 %');
    // Export is no part of this figure.
    expect(text).not.toContain('Export');
  });

  it('that is not known gives its reason and no working', async () => {
    const wrapper = page(
      day('2026-11-23', { reasons: { solarFraction: 'the tank is not logged' }, rests: {} }),
      'solarFraction',
    );
    await wrapper.get('button').trigger('click');
    const text = plain(wrapper.get('dialog').text());
    expect(text).toContain('the tank is not logged');
    expect(text).not.toContain('Working');
  });

  it('in money shows every term of the account with its sign', async () => {
    const wrapper = page(
      day('2026-11-23', { netSaving: 0.2, savingTerms: { fuel: 0.5, export: -0.2, bought: -0.1 } }),
      'netSaving',
    );
    await wrapper.get('button').trigger('click');
    expect(plain(wrapper.get('dialog').text())).toContain(
      'fuel not bought £0.50 − export given up £0.20 − bought heat £0.10 = £0.20',
    );
  });

  it('closes by its button', async () => {
    const wrapper = page(day('2026-11-23', { divertedKwh: 1 }), 'divertedKwh');
    await wrapper.get('button').trigger('click');
    await wrapper.get('.slip__close').trigger('click');
    expect(wrapper.get('dialog').attributes('open')).toBeUndefined();
  });
});
