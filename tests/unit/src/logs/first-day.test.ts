import { describe, expect, it } from 'vitest';
import { firstDaySpan, pathOf } from '../../../../src/components/logs/first-day.ts';

const HOUR = 3_600_000;

describe('firstDaySpan', () => {
  it('takes the first day where it is covered from its midnight', () => {
    const span = firstDaySpan('2025-05-04T23:01:00Z', '2025-05-09T23:00:00Z', 'Europe/London');
    expect(span).toEqual({
      date: '2025-05-05',
      from: Date.parse('2025-05-05T00:00:00+01:00'),
      to: Date.parse('2025-05-06T00:00:00+01:00'),
    });
  });
  it('passes over a day that began before the log', () => {
    expect(firstDaySpan('2025-05-05T12:00:00Z', '2025-05-08T12:00:00Z', 'Europe/London')?.date).toBe('2025-05-06');
  });
  it('stays with the only day there is', () => {
    expect(firstDaySpan('2025-05-05T12:00:00Z', '2025-05-05T18:00:00Z', 'Europe/London')?.date).toBe('2025-05-05');
  });
  it('knows a day of 23 hours', () => {
    // Clocks in London go forward on 30 March 2025.
    const span = firstDaySpan('2025-03-30T00:00:00Z', '2025-04-02T00:00:00Z', 'Europe/London');
    expect(span && (span.to - span.from) / HOUR).toBe(23);
  });
  it('is nothing where nothing was read', () => {
    expect(firstDaySpan(null, null, 'UTC')).toBeNull();
  });
});

describe('pathOf', () => {
  it('lifts the pencil at a gap', () => {
    const { path, low, high } = pathOf(
      [
        [0, 0],
        [25, 10],
        [50, null],
        [75, 10],
        [100, 0],
      ],
      0,
      100,
      100,
      24,
    );
    expect(path).toBe('M0.0 22.0L25.0 2.0M75.0 2.0L100.0 22.0');
    expect([low, high]).toEqual([0, 10]);
  });
  it('draws nothing of nothing', () => {
    expect(pathOf([[0, null]], 0, 100, 100, 24).path).toBe('');
  });
});
