import { spawn } from 'node:child_process';
import fs from 'node:fs';
import path from 'node:path';
import { build } from '../../server/launch/build.mjs';
import { guarded } from '../../server/launch/guard.mjs';
import { DATA, ROOT } from '../../server/launch/paths.mjs';
import { prepare } from '../../server/launch/prepare.mjs';
import { endGroup, run, until } from '../../server/launch/processes.mjs';
import { complain, Refusal } from '../../server/launch/say.mjs';
import { onStop } from '../../server/launch/stop.mjs';
import { startThrowaway } from './postgres.mjs';

/** The suites in the order of a full run; the first to fail tell most for the least time. */
const SUITES = ['check', 'unit', 'api', 'reference', 'faults', 'e2e'];
const ON_DATABASE = ['api', 'reference', 'faults'];
const PROJECTS = { unit: ['unit', 'unit-client'], api: ['api'], reference: ['reference'], faults: ['faults'] };

const ending = onStop((signal) => (signal === 'SIGTERM' ? 143 : 130));
try {
  const { suites, files } = selected(process.argv.slice(2));
  const total = await runAll(suites, files);
  for (const { title, reason } of total.skipped) print(`skipped: ${title}: ${reason ?? 'no reason given'}`);
  const skipped = total.skipped.length > 0 ? `, ${total.skipped.length} skipped` : '';
  ending.lastly(() => print(`${total.passed} passed, ${total.failed} failed${skipped}`));
  await ending.end(total.failed > 0 ? 1 : 0);
} catch (error) {
  await ending.fail(() => {
    complain(error);
    ending.lastly(() => print('0 passed, 1 failed'));
  });
}

/** What the arguments name: suites, or files and folders under tests/; nothing: everything. */
function selected(names) {
  const files = names.filter((name) => !SUITES.includes(name));
  for (const file of files)
    if (!fs.existsSync(path.join(ROOT, file)) || suiteOf(file) === null)
      throw new Refusal(
        `There are no tests named ${file}. The suites are ${SUITES.join(', ')}; or name a file under tests/.`,
      );
  const suites =
    names.length === 0
      ? SUITES
      : SUITES.filter((suite) => names.includes(suite) || files.some((file) => suiteOf(file) === suite));
  return { suites, files: files.map((file) => path.normalize(file)) };
}

function suiteOf(file) {
  const [top, suite] = path.normalize(file).split(path.sep);
  return top === 'tests' && SUITES.includes(suite) ? suite : null;
}

async function runAll(suites, files) {
  const total = { passed: 0, failed: 0, skipped: [] };
  const add = ({ passed, failed, skipped = [] }) => {
    total.passed += passed;
    total.failed += failed;
    total.skipped.push(...skipped);
  };
  const onVitest = suites.filter((suite) => suite in PROJECTS);
  await prepare({ database: suites.some((suite) => suite !== 'check'), browser: suites.includes('e2e') });
  if (suites.includes('check')) add(await runChecks());
  if (onVitest.length > 0) add(await runVitest(onVitest, files));
  if (suites.includes('e2e')) add(await runBrowser(files.filter((file) => suiteOf(file) === 'e2e')));
  return total;
}

/** Types, lint, formatting: each counts as one test. */
async function runChecks() {
  const tools = {
    types: ['vue-tsc/bin/vue-tsc.js', '-b'],
    lint: ['eslint/bin/eslint.js', '.', '--max-warnings', '0'],
    formatting: ['prettier/bin/prettier.cjs', '--check', '--log-level', 'warn', '.'],
  };
  const count = { passed: 0, failed: 0 };
  for (const [name, [tool, ...args]] of Object.entries(tools)) {
    const { code } = await node([path.join('node_modules', tool), ...args]);
    print(`${code === 0 ? 'passed' : 'FAILED'}: check of ${name}`);
    count[code === 0 ? 'passed' : 'failed'] += 1;
  }
  return count;
}

async function runVitest(suites, files) {
  const server = suites.some((suite) => ON_DATABASE.includes(suite)) ? await startThrowaway() : null;
  if (server) ending.lastly(server.stop);
  if (suites.includes('faults')) await build();
  const projects = suites.flatMap((suite) => PROJECTS[suite]);
  const tallyFile = path.join(scratch(), 'vitest.json');
  const { code } = await node(
    [
      'node_modules/vitest/vitest.mjs',
      'run',
      ...projects.flatMap((project) => ['--project', project]),
      ...['--reporter', 'default', '--reporter', './tests/support/tally.mjs'],
      ...files.filter((file) => suiteOf(file) !== 'e2e'),
    ],
    { TALLY_FILE: tallyFile, ...(server ? { TEST_DATABASE_URL: server.url } : {}) },
  );
  await server?.stop();
  const tally = readJson(tallyFile);
  if (!tally) return broken(`vitest ended with code ${code} before it could count`);
  const counts = Object.values(tally.projects);
  const sum = { passed: 0, failed: tally.errors, skipped: tally.skipped };
  for (const { passed, failed } of counts) {
    sum.passed += passed;
    sum.failed += failed;
  }
  const empty = suites.filter((suite) => !PROJECTS[suite].some((project) => project in tally.projects));
  for (const suite of empty) sum.failed += broken(`the suite ${suite} has no tests`).failed;
  if (code !== 0 && sum.failed === 0) sum.failed += broken(`vitest ended with code ${code}`).failed;
  return sum;
}

/** Browser tests use the product as people get it: started by the start command, with its demo. */
async function runBrowser(files) {
  const product = await startProduct();
  if (!product) return broken('the product did not start, so there are no browser tests');
  const report = path.join(scratch(), 'browser.json');
  const { code } = await node(
    [
      'node_modules/@playwright/test/cli.js',
      'test',
      '-c',
      'tests/e2e/playwright.config.ts',
      ...files,
      '--reporter',
      'list,json',
    ],
    { E2E_URL: product.url, E2E_PASSWORD: product.password, PLAYWRIGHT_JSON_OUTPUT_FILE: report },
  );
  await product.stop();
  const result = readJson(report);
  if (!result) return broken(`the browser tests ended with code ${code} before they could count`);
  const { expected, unexpected, flaky } = result.stats;
  const sum = {
    passed: expected,
    failed: unexpected + flaky + result.errors.length,
    skipped: skippedIn(result.suites),
  };
  if (expected + unexpected + flaky === 0) sum.failed += broken('there are no browser tests').failed;
  if (code !== 0 && sum.failed === 0) sum.failed += broken(`the browser tests ended with code ${code}`).failed;
  return sum;
}

function skippedIn(suites, above = '') {
  return suites.flatMap((suite) => {
    const title = `${above}${suite.title} > `;
    const own = suite.specs.flatMap((spec) =>
      spec.tests
        .filter(({ status }) => status === 'skipped')
        .map(({ annotations }) => ({
          title: `${title}${spec.title}`,
          reason: annotations.find(({ type }) => type === 'skip' || type === 'fixme')?.description ?? null,
        })),
    );
    return [...own, ...skippedIn(suite.suites ?? [], title)];
  });
}

async function startProduct() {
  const env = { ...process.env, DATA_FOLDER: path.join(scratch(), 'product'), PORT: '0', DEMO: 'on' };
  for (const name of ['DATABASE_URL', 'BASE_URL', 'SMTP_URL', 'DEMO_PASSWORD', 'npm_lifecycle_event']) delete env[name];
  const child = guarded(
    spawn(process.execPath, ['server/launch/start.mjs'], {
      cwd: ROOT,
      env,
      detached: true,
      stdio: ['ignore', 'pipe', 2],
    }),
  );
  const stop = () => endGroup(child.pid, { graceMs: 60_000 });
  ending.lastly(stop);
  let output = '';
  child.stdout.on('data', (piece) => (output += piece));
  const said = /Coppernoon is ready at (\S+)\ndemo password: (\S+)\n/;
  await until(() => child.exitCode !== null || said.test(output), 5 * 60_000, 100);
  const found = said.exec(output);
  if (found) return { url: found[1], password: found[2], stop };
  await stop();
  return null;
}

function node(args, env = {}) {
  return run(process.execPath, args, { cwd: ROOT, env: { ...process.env, ...env }, out: 1 });
}

function broken(why) {
  print(`FAILED: ${why}`);
  return { passed: 0, failed: 1 };
}

/** A folder for this run, which goes with it. */
function scratch() {
  const folder = path.join(DATA, 'test', `run-${process.pid}`);
  if (!fs.existsSync(folder)) {
    fs.mkdirSync(folder, { recursive: true });
    ending.lastly(() => fs.rmSync(folder, { recursive: true, force: true }));
  }
  return folder;
}

function readJson(file) {
  return fs.existsSync(file) ? JSON.parse(fs.readFileSync(file, 'utf8')) : null;
}

function print(line) {
  process.stdout.write(`${line}\n`);
}
