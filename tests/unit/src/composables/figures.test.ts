import { describe, expect, it } from 'vitest';
import { FIGURES } from '../../../../shared/api/day.ts';
import { FIGURE_BOOK } from '../../../../src/composables/figures.ts';
import { day } from './day.ts';

const context = { currency: 'GBP', property: null };
const plain = (text: string | null): string | undefined => text?.replace(/\u00a0/g, ' ');

describe('the book of figures', () => {
  it('says of no figure a working with a number that is not known', () => {
    for (const figure of FIGURES) expect(FIGURE_BOOK[figure].working(day('2026-11-23'), context)).toBeNull();
  });
  it('divides by nothing without saying anything untrue', () => {
    const zeros = day('2026-11-23', Object.fromEntries(FIGURES.map((name) => [name, 0])));
    for (const figure of FIGURES)
      expect(FIGURE_BOOK[figure].working(zeros, context) ?? '').not.toMatch(/NaN|∞|Infinity/);
  });
  it('works gas out by the formula of SI 1996/439 with the calorific value put in', () => {
    // 11.22 kWh per m³ at 39.5 MJ/m³: 39.5 × 1.02264 / 3.6.
    const some = day('2026-11-23', { gasDisplacedKwh: 112.2, gasDisplacedM3: 10 });
    expect(plain(FIGURE_BOOK.gasDisplacedM3.working(some, context))).toContain('÷ (1.02264 × 39.5 MJ/m³)');
  });
  it('puts the efficiency in', () => {
    const some = day('2026-11-23', { usefulHeatKwh: 7.4, gasDisplacedKwh: 10 });
    expect(plain(FIGURE_BOOK.gasDisplacedKwh.working(some, context))).toContain('÷ efficiency for hot water 0.74 =');
  });
});
