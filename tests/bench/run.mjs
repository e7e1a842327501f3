import { spawn } from 'node:child_process';
import path from 'node:path';
import { startThrowaway } from '../support/postgres.mjs';

const ROOT = path.resolve(import.meta.dirname, '../..');

/**
 * `npm run bench`: every row of what is to be held, measured side by side on a PostgreSQL of its own as it is shipped,
 * or on the one that DATABASE_URL leads to. `-- ROW` measures one row, `--quick` one-year files and five pairs.
 */
const given = process.env.DATABASE_URL;
const own = given ? null : await startThrowaway();
const child = spawn(process.execPath, ['--import', 'tsx', 'tests/bench/main.ts', ...process.argv.slice(2)], {
  cwd: ROOT,
  stdio: 'inherit',
  env: { ...process.env, BENCH_SERVER: given ?? own.url },
});
for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => child.kill(signal));
child.once('exit', async (code) => {
  await own?.stop();
  process.exit(code ?? 1);
});
