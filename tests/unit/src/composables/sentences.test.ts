import { describe, expect, it } from 'vitest';
import { daySentence, readySentence, sunSentence, worthSentence } from '../../../../src/composables/sentences.ts';
import { day, totals } from './day.ts';

const plain = (text: string | null): string | undefined => text?.replace(/\u00a0/g, ' ');
const week = (over: (i: number) => object = () => ({})) =>
  Array.from({ length: 7 }, (_, i) => day(`2026-11-${23 + i}`, over(i)));
const period = { possessive: 'this week’s', when: 'this week' };

describe('sunSentence', () => {
  it('names the share where every day knows it', () => {
    const days = week(() => ({ solarFraction: 0.6, divertedKwh: 3 }));
    expect(plain(sunSentence(totals(days, { solarFraction: 0.61 }), days, period))).toBe(
      'The sun made 61 % of this week’s hot water',
    );
  });
  it('says on how many days a share rests where not all know it', () => {
    const days = week((i) => ({ solarFraction: i < 5 ? 0.6 : null, divertedKwh: 3 }));
    expect(plain(sunSentence(totals(days, { solarFraction: 0.61 }), days, period))).toBe(
      'The sun made 61 % of this week’s hot water, as far as 5 of 7 days tell',
    );
  });
  it('names the energy where no share is known', () => {
    const days = week(() => ({ divertedKwh: 3 }));
    expect(plain(sunSentence(totals(days, { divertedKwh: 23.4 }), days, period))).toBe(
      'The sun put 23.4 kWh into the cylinder this week',
    );
  });
  it('says "at least" where days are missing', () => {
    const days = week((i) => (i < 4 ? { divertedKwh: 3 } : { coverage: {} }));
    expect(plain(sunSentence(totals(days, { divertedKwh: 12 }), days, period))).toBe(
      'The sun put at least 12.0 kWh into the cylinder this week, with logs for 4 of 7 days',
    );
  });
  it('a measured nothing is said as nothing', () => {
    const days = week(() => ({ divertedKwh: 0 }));
    expect(sunSentence(totals(days, { divertedKwh: 0 }), days, period)).toBe('No sun went into the cylinder this week');
  });
  it('a measured nothing on some days claims nothing of the others', () => {
    const days = week((i) => (i < 1 ? { divertedKwh: 0 } : { coverage: {} }));
    expect(sunSentence(totals(days, { divertedKwh: 0 }), days, period)).toBe(
      'No sun went into the cylinder this week, with logs for 1 of 7 days',
    );
  });
  it('a week that is still going on is spoken of so far', () => {
    const days = week(() => ({ divertedKwh: 1 })).slice(0, 2);
    const so = { ...period, running: true };
    expect(plain(sunSentence(totals(days, { divertedKwh: 2 }), days, so))).toBe(
      'The sun put 2.00 kWh into the cylinder this week so far',
    );
    const known = days.map((one) => ({ ...one, solarFraction: 0.4 }));
    expect(plain(sunSentence(totals(known, { solarFraction: 0.4 }), known, so))).toBe(
      'The sun made 40 % of this week’s hot water so far',
    );
  });
  it('export alone claims nothing of the cylinder', () => {
    const days = week(() => ({ exportKwh: 2, coverage: { export: 1 } }));
    expect(sunSentence(totals(days, { exportKwh: 14 }), days, period)).toContain('is not logged');
  });
  it('no logs are no logs', () => {
    const days = week(() => ({ coverage: {}, complete: false }));
    expect(sunSentence(totals(days), days, period)).toBe('No logs this week');
  });
});

describe('daySentence', () => {
  it('speaks of the logged part of a day that is not complete', () => {
    expect(plain(daySentence(day('2026-11-23', { divertedKwh: 1.5, complete: false })))).toBe(
      'The sun put 1.50 kWh into the cylinder in the logged part of this day',
    );
  });
  it('says that nothing is known rather than nothing happened', () => {
    expect(daySentence(day('2026-11-23', { coverage: {} }))).toBe('No logs on this day');
    expect(daySentence(day('2026-11-23'))).toContain('do not say');
  });
});

describe('readySentence', () => {
  it.each([
    [{ met: 7, known: 7 }, 7, 'on every evening'],
    [{ met: 3, known: 7 }, 7, 'Ready at 18:00 on 3 of 7 evenings'],
    [{ met: 0, known: 7 }, 7, 'Not ready at 18:00 on any of 7 evenings'],
    [{ met: 4, known: 5 }, 7, 'on 4 of 5 evenings known, of 7'],
    [{ met: 0, known: 0 }, 7, 'Not known'],
  ])('%o of %s days: %s', (evenings, days, part) => expect(readySentence(evenings, days, '18:00')).toContain(part));
});

describe('worthSentence', () => {
  const days = week();
  it('gives money and gas where both are known', () => {
    expect(plain(worthSentence(totals(days, { netSaving: 1.43, gasDisplacedM3: 3.57 }), true, 'GBP'))).toBe(
      'Worth £1.43 net; 3.57 m³ of gas not burnt.',
    );
  });
  it('shows a loss as a loss', () => {
    expect(worthSentence(totals(days, { netSaving: -0.4 }), true, 'GBP')).toBe('Worth -£0.40 net.');
  });
  it('says nothing where nothing is known', () => expect(worthSentence(totals(days), true, 'GBP')).toBeNull());
});
