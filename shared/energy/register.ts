import type { RegisterNotes } from './pieces.ts';
import type { Samples } from './samples.ts';

/**
 * What a counter moved between two readings: a fall of one display digit is nothing; from within 1 % below a power of
 * ten, 2^16 or 2^32 of its counts to below 1 % of it the counter began again; any other fall is a reset.
 *
 * @param digit one digit of the display, in the unit of the readings
 * @returns the difference, NaN for a reset
 */
export function registerStep(before: number, after: number, digit: number): number {
  if (after >= before) return after - before;
  if (before - after <= digit * 1.000001) return 0;
  if (after < 0) return NaN;
  for (let size = 10 * digit; size <= 1e15 * digit; size *= 10)
    if (wraps(before, after, size)) return after - before + size;
  for (const counts of [2 ** 16, 2 ** 32])
    if (wraps(before, after, counts * digit)) return after - before + counts * digit;
  return NaN;
}

function wraps(before: number, after: number, size: number): boolean {
  // The size is a product of decimals: a hair's breadth belongs to it.
  return before < size * (1 + 1e-12) && before >= 0.99 * size && after < 0.01 * size;
}

/** What a log's counter moved in each of its steps; NaN for a reset. Several counters are taken one by one and added. */
export function registerSteps(s: Samples, mayFall: boolean, notes: RegisterNotes): Float64Array {
  const last = Math.max(0, s.n - 1);
  const steps = new Float64Array(last);
  const counters = s.parts.length ? s.parts : [s.v];
  for (const v of counters) {
    for (let i = 0; i < last; i++) {
      const move = v[i + 1] - v[i];
      if (move >= 0 || mayFall) {
        steps[i] += move;
        continue;
      }
      const step = registerStep(v[i], v[i + 1], s.digit);
      if (step !== step) notes.resets.push(s.t[i + 1]);
      else if (step > 0) notes.rollovers.push(s.t[i + 1]);
      steps[i] += step;
    }
  }
  return steps;
}
