import { describe, expect, it } from 'vitest';
import { clockTicks, hoursOf, meanOver, tickStep, valueAt } from '../../../../src/composables/hours.ts';
import type { Points } from '../../../../src/composables/hours.ts';

const HOUR = 3_600_000;

describe('hours of a day', () => {
  // Clock changes of 2026 in Great Britain: 29 March and 25 October.
  it.each([
    ['2026-03-29', 23],
    ['2026-06-17', 24],
    ['2026-10-25', 25],
  ])('%s has %s of them', (date, count) => {
    const hours = hoursOf(date, 'Europe/London');
    expect(hours).toHaveLength(count);
    hours.slice(1).forEach((hour, i) => expect(hour.from).toBe(hours[i].to));
  });

  it('an hour that clocks show twice has two ticks, one that they leave out none', () => {
    const ticks = (date: string) => {
      const hours = hoursOf(date, 'Europe/London');
      return clockTicks(date, 'Europe/London', 60, hours[0].from, hours[hours.length - 1].to).length;
    };
    expect(ticks('2026-10-25')).toBe(26);
    expect(ticks('2026-06-17')).toBe(25);
    expect(ticks('2026-03-29')).toBe(24);
  });
  it('ticks are as far apart as the span asks', () => {
    expect(tickStep(24 * HOUR, 8)).toBe(180);
    expect(tickStep(HOUR, 6)).toBe(10);
  });
});

describe('meanOver', () => {
  const hour = { from: 0, to: HOUR };
  it('of a straight line is its middle', () => {
    const points: Points = [
      [0, 0],
      [HOUR, 100],
    ];
    expect(meanOver(points, hour)).toEqual({ mean: 50, covered: 1 });
  });
  it('cuts a line at the edges of the span', () => {
    const points: Points = [
      [-HOUR, 0],
      [3 * HOUR, 400],
    ];
    expect(meanOver(points, hour)!.mean).toBeCloseTo(150, 9);
  });
  it('bridges no gap and says how much is covered', () => {
    const points: Points = [
      [0, 10],
      [HOUR / 4, 10],
      [HOUR / 4 + 1, null],
      [HOUR / 2, 30],
      [HOUR, 30],
    ];
    const mean = meanOver(points, hour)!;
    expect(mean.covered).toBeCloseTo(0.75, 6);
    expect(mean.mean).toBeCloseTo((10 * 0.25 + 30 * 0.5) / 0.75, 6);
  });
  it('of nothing is not known, never zero', () => {
    expect(meanOver([], hour)).toBeNull();
    expect(meanOver([[0, null]], hour)).toBeNull();
  });
});

describe('valueAt', () => {
  const points: Points = [
    [0, 10],
    [100, 20],
    [200, null],
    [300, 40],
  ];
  it.each([
    [50, 15],
    [100, 20],
    [150, null],
    [250, null],
    [300, 40],
    [-1, null],
    [400, null],
  ])('at %s is %s', (at, value) => expect(valueAt(points, at)).toBe(value));
  it('a state holds until the next point', () => expect(valueAt(points, 99, true)).toBe(10));
});
