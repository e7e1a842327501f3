import { readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { sampleBytes, SAMPLES } from '../../samples/make/files.ts';
import { simulate, type TrueDay } from '../../samples/make/simulate.ts';
import { duck } from '../support/duck.ts';
import { ASKED } from './samples.sql.ts';

const folder = path.resolve(import.meta.dirname, '../../samples');
const onDisk = readdirSync(folder).filter((name) => name.endsWith('.csv'));

/** What truly happened, for the sums that a log can hold. */
const TRUTH: Partial<Record<string, (day: TrueDay) => number>> = {
  export: (day) => day.export,
  import: (day) => day.import,
  net: (day) => day.import - day.export,
  diversion: (day) => day.heater * 1.01,
  generation: (day) => day.generation,
  gasM3: (day) => (day.fuel * 3.6) / (1.02264 * 39.5),
};

describe('the sample logs', () => {
  it('are those that the simulation writes, to the byte, and each is named in their README and asked of DuckDB', () => {
    const readme = readFileSync(path.join(folder, 'README.md'), 'utf8');
    expect(onDisk.sort()).toEqual(Object.keys(SAMPLES).sort());
    expect(Object.keys(ASKED).sort()).toEqual(onDisk.sort());
    let bytes = 0;
    for (const [name, sample] of Object.entries(SAMPLES)) {
      const written = readFileSync(path.join(folder, name));
      expect(written.equals(sampleBytes(sample)), name).toBe(true);
      expect(readme).toContain(`\`${name}\``);
      bytes += written.length;
    }
    expect(bytes).toBeLessThan(2_000_000);
  }, 60_000);

  it.each(Object.keys(ASKED))('%s says what truly happened, as DuckDB reads it', async (name) => {
    const { home, from, to, faults } = SAMPLES[name];
    const { days } = simulate(home, from, to, faults);
    const rows = await duck(ASKED[name].sql('held'));
    for (const channel of ASKED[name].truth ?? ASKED[name].asks) {
      const truth = TRUTH[channel];
      if (!truth) continue;
      expect(rows.length).toBe(days.length);
      // A counter's last digit at both ends, and half a watt or half a step in each reading.
      const step = channel === 'gasM3' ? 0.011 : 0.012;
      for (const [i, row] of rows.entries()) {
        expect(row.day).toBe(days[i].date);
        expect(Math.abs(Number(row[channel]) - truth(days[i])), `${row.day} ${channel}`).toBeLessThan(step);
      }
    }
  });
});
