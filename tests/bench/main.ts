import { execFileSync } from 'node:child_process';
import fs from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { query } from '../support/query.ts';
import { answerRate, worstDuringUpload } from './answers.ts';
import { FILES } from './contenders.ts';
import { measure, median, Runner, TOO_NOISY } from './pairs.ts';
import type { Measured } from './pairs.ts';
import { newPlace } from './place.ts';

const args = process.argv.slice(2);
const quick = args.includes('--quick');
const only = args.filter((arg) => !arg.startsWith('--'));
const turns = quick ? { warmUps: 2, pairs: 5 } : { warmUps: 4, pairs: 11 };

/** What a row came to; `noise` is the yardstick's median over its minimum, where there is one. */
interface Result {
  value: number;
  detail: string;
  noise?: number;
}

interface Row {
  /** For `npm run bench -- ROW`. */
  id: string;
  title: string;
  hold: number;
  fail: number;
  /** Whether more is better. */
  more?: boolean;
  /** Left out of a quick run: needs ten years. */
  long?: boolean;
  measure(): Promise<Result>;
}

const ms = (value: number) => (value < 10 ? value.toFixed(2) : value.toFixed(0));
const described = (m: Measured): string =>
  `${ms(m.ms)} ms / ${ms(m.yardstickMs)} ms, pairs ${m.spread[0].toFixed(2)} to ${m.spread[1].toFixed(2)}`;

const pair =
  (name: string, yardstick: string, options: { figure?: string; scale?: number; pairs?: number } = {}) =>
  async (): Promise<Result> => {
    const pairs = options.pairs ?? turns.pairs;
    const m = await measure({ name, yardstick, ...turns, pairs, figure: options.figure });
    return { value: m.ratio * (options.scale ?? 1), detail: described(m), noise: m.noise };
  };

/** Each pair's ingest is the first thing that a new process does. */
async function cold(): Promise<Result> {
  const copy = await Runner.start('copy');
  for (let i = 0; i < turns.warmUps; i++) await copy.round();
  const ratios: number[] = [];
  const yards: number[] = [];
  const ours: number[] = [];
  for (let i = 0; i < Math.min(turns.pairs, 7); i++) {
    const fresh = await Runner.start('year');
    yards.push((await copy.round()).ms);
    ours.push((await fresh.round()).ms);
    ratios.push(ours[i] / yards[i]);
    await fresh.stop();
  }
  await copy.stop();
  return {
    value: median(ratios),
    detail: `${ms(median(ours))} ms / ${ms(median(yards))} ms`,
    noise: median(yards) / Math.min(...yards),
  };
}

async function memory(name: string): Promise<Result> {
  const peaks: number[] = [];
  for (let i = 0; i < 3; i++) {
    const fresh = await Runner.start(name);
    peaks.push((await fresh.round())['megabytes']);
    await fresh.stop();
  }
  return { value: median(peaks), detail: `MB, ${peaks.map((peak) => peak.toFixed(0)).join(', ')}` };
}

/** Bytes that do not vary from run to run. */
async function sizes(): Promise<{ perReading: number; original: number; blocks: number }> {
  const place = await newPlace();
  const { csv, rows } = FILES['year']();
  const { db } = place.deps;
  const size = async () => {
    const [row] = await db.query<{ blocks: number; original: number }>(
      `select pg_total_relation_size('day_blocks') + pg_total_relation_size('log_blocks') as blocks,
         pg_total_relation_size('original_chunks') + pg_total_relation_size('originals') as original`,
    );
    return row!;
  };
  const before = await size();
  const id = await place.property();
  const { n } = await place.upload(id, csv);
  await place.ingest(id, n);
  const after = await size();
  await place.close();
  const blocks = after.blocks - before.blocks;
  return { perReading: blocks / (rows * 4), original: (after.original - before.original) / csv.length, blocks };
}

const ROWS: Row[] = [
  { id: 'ingest', title: 'ingest of the year file / COPY', hold: 0.5, fail: 1, measure: pair('year', 'copy') },
  { id: 'duck', title: 'the same / DuckDB, one thread', hold: 0.8, fail: 1.5, measure: pair('year', 'duck') },
  { id: 'again', title: 'the same file again / COPY', hold: 0.1, fail: 0.3, measure: pair('again', 'copy') },
  { id: 'overlap', title: 'a file overlapping by half / COPY', hold: 0.7, fail: 1.3, measure: pair('overlap', 'copy') },
  { id: 'general', title: 'general reader / COPY', hold: 1.2, fail: 2, measure: pair('general', 'copy') },
  { id: 'cold', title: 'first upload in a fresh process / COPY', hold: 0.8, fail: 1.3, measure: cold },
  {
    id: 'http',
    title: 'over HTTP with the worker / called directly',
    hold: 1.5,
    fail: 2,
    measure: pair('http', 'direct'),
  },
  {
    id: 'acknowledged',
    title: 'upload to acknowledged original / COPY',
    hold: 0.5,
    fail: 1,
    measure: pair('http', 'copy', { figure: 'acknowledged' }),
  },
  {
    id: 'decade',
    title: 'ten years in one file: time per row / one year’s',
    hold: 1.1,
    fail: 1.4,
    long: true,
    measure: pair('decade', 'year', { scale: 365 / 3652, pairs: 5 }),
  },
  {
    id: 'more',
    title: 'one more day on ten years / on one month',
    hold: 1.2,
    fail: 2,
    long: true,
    measure: pair('moreOnDecade', 'moreOnMonth'),
  },
  {
    id: 'bytes',
    title: 'bytes on disk per reading, indexes included',
    hold: 1.5,
    fail: 3,
    measure: async () => {
      const { perReading, blocks } = await sizes();
      return { value: perReading, detail: `${blocks} bytes of blocks and references` };
    },
  },
  {
    id: 'original',
    title: 'original kept / CSV bytes',
    hold: 0.4,
    fail: 0.7,
    measure: async () => ({ value: (await sizes()).original, detail: 'indexes included' }),
  },
  {
    id: 'memory',
    title: 'peak memory above idle, year file, MB',
    hold: 100,
    fail: 200,
    measure: () => memory('memoryYear'),
  },
  {
    id: 'memory-decade',
    title: 'peak memory above idle, ten-year file, MB',
    hold: 100,
    fail: 200,
    long: true,
    measure: () => memory('memoryDecade'),
  },
  {
    id: 'worst',
    title: 'worst answer of others during an upload / idle p99',
    hold: 3,
    fail: 10,
    measure: async () => {
      const { ratio, p99, worst } = await worstDuringUpload(folder, quick ? 3 : 7);
      return { value: ratio, detail: `${ms(worst)} ms / ${ms(p99)} ms` };
    },
  },
  {
    id: 'chart',
    title: 'year chart from blocks / SQL over rows',
    hold: 0.1,
    fail: 0.5,
    measure: pair('chart', 'chartSql'),
  },
  {
    id: 'correction',
    title: 'one correction in the preview / inspection of the file',
    hold: 0.2,
    fail: 1,
    measure: pair('correction', 'inspection'),
  },
  {
    id: 'answers',
    title: 'one-row answers per second / a hello by Express',
    hold: 0.6,
    fail: 0.4,
    more: true,
    measure: async () => {
      const { ratio, ours, hello } = await answerRate(quick ? 2 : 4);
      return { value: ratio, detail: `${ours.toFixed(0)} / ${hello.toFixed(0)} per second` };
    },
  },
];

function verdict({ hold, fail, more }: Row, value: number): 'hold' | 'miss' | 'FAIL' {
  const sign = more ? -1 : 1;
  if (value * sign <= hold * sign) return 'hold';
  return value * sign <= fail * sign ? 'miss' : 'FAIL';
}

const folder = fs.mkdtempSync(path.join(os.tmpdir(), 'coppernoon-bench-'));
process.env.BENCH_FOLDER = folder;
process.once('exit', () => fs.rmSync(folder, { recursive: true, force: true }));

const unknown = only.filter((id) => !ROWS.some((row) => row.id === id));
if (unknown.length) {
  process.stderr.write(`There is no row ${unknown.join(', ')}. The rows: ${ROWS.map(({ id }) => id).join(', ')}\n`);
  process.exit(1);
}
for (const [name, make] of Object.entries(FILES)) {
  if (quick && name === 'decade') continue;
  const { csv, ...facts } = make();
  fs.writeFileSync(path.join(folder, `${name}.csv`), csv);
  fs.writeFileSync(path.join(folder, `${name}.json`), JSON.stringify(facts));
}

const started = performance.now();
const lines: string[] = [];
let failed = 0;
for (const row of ROWS) {
  if (only.length ? !only.includes(row.id) : quick && row.long) continue;
  let line: string;
  try {
    const { value, detail, noise } = await row.measure();
    const result = verdict(row, value);
    const noisy = noise !== undefined && noise > TOO_NOISY;
    if (result === 'FAIL' && !noisy) failed++;
    const shown = noisy ? `too noisy (yardstick median/minimum ${noise.toFixed(2)}); would be ${result}` : result;
    line = `| ${row.title} | ${value.toFixed(3)} | ${row.hold} | ${row.fail} | ${shown} | ${detail} |`;
  } catch (error) {
    failed++;
    line = `| ${row.title} | — | ${row.hold} | ${row.fail} | FAIL | ${error instanceof Error ? error.message.split('\n')[0] : String(error)} |`;
  }
  lines.push(line);
  process.stdout.write(`${line}\n`);
}

if (only.length === 0 && !quick) {
  const [{ version }] = await query<{ version: string }>(
    process.env.BENCH_SERVER ?? '',
    `select current_setting('server_version') as version`,
  );
  const commit = execFileSync('git', ['rev-parse', '--short', 'HEAD'], { encoding: 'utf8' }).trim();
  const minutes = ((performance.now() - started) / 60_000).toFixed(0);
  fs.writeFileSync(
    path.resolve(import.meta.dirname, 'RESULTS.md'),
    `# What the benchmark came to

${new Date().toISOString().slice(0, 10)}, commit ${commit}, Node ${process.versions.node}, PostgreSQL ${version}, ${os.cpus().length} cores (${os.cpus()[0]?.model.trim()}),
load ${os.loadavg()[0].toFixed(1)} at the end, ${minutes} minutes. Written by \`npm run bench\`; a ratio is the median over pairs that took turns.

| figure | measured | hold | fail past | | how |
| --- | --- | --- | --- | --- | --- |
${lines.join('\n')}
`,
  );
}
process.stdout.write(`${failed} past what fails\n`);
process.exit(failed ? 1 : 0);
