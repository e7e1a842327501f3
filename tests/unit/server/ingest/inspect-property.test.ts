import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { inspectBytes } from '../../../../server/ingest/inspect.ts';
import { read } from './reading.ts';
import { writtenLogs } from './written.ts';

/** `FUZZ` times as many cases, for long runs. */
const MORE = Number(process.env.FUZZ ?? 1);

describe('inspection and reading together', { timeout: 120_000 * MORE }, () => {
  it('give back what any log says, or ask; never something else unasked', async () => {
    let asked = 0;
    let understood = 0;
    await fc.assert(
      fc.asyncProperty(writtenLogs, async (log) => {
        const place = { timeZone: log.timeZone, latitude: null, longitude: null, country: null };
        const { plan, questions, problems } = await inspectBytes(log.bytes, 'log.csv', place);
        const about = `${log.form} in ${log.timeZone}\n${log.text.slice(0, 400)}\n${JSON.stringify(plan)}\n${JSON.stringify(problems)}`;
        expect(plan, about).not.toBeNull();
        if (!plan) return;
        if (questions.length > 0) {
          asked++;
          return;
        }
        understood++;
        const { readings } = await read(log.bytes, plan);
        const meant = plan.columns.map(({ channel, kind, unit, sign, factor }, i) => ({
          channel,
          kind,
          unit,
          sign,
          factor,
          readings: readings[i],
        }));
        expect(meant, about).toHaveLength(log.said.length);
        for (const { channel, kind, unit, readings: expected } of log.said) {
          const got = meant.find((column) => column.channel === channel);
          expect(got && { kind: got.kind, unit: got.unit, sign: got.sign, factor: got.factor }, about).toEqual({
            kind,
            unit,
            sign: 1,
            factor: undefined,
          });
          expect(got?.readings, about).toEqual(expected);
        }
        if (log.said.some(({ kind }) => kind === 'energy')) expect(plan.time.stamp, about).toBe('start');
      }),
      { numRuns: 60 * MORE },
    );
    // Asking everything would be no understanding.
    expect(understood).toBeGreaterThan(asked);
  });
});
