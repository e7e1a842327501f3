import { spawn } from 'node:child_process';
import { createHash, randomBytes } from 'node:crypto';
import fs from 'node:fs';
import path from 'node:path';
import { build, ENTRIES } from './build.mjs';
import { takeLock } from './lock.mjs';
import { logFile, tail } from './log-file.mjs';
import { DATA, DIST, ROOT } from './paths.mjs';
import { freePort, holderOf, isFree } from './ports.mjs';
import { openPostgres } from './postgres.mjs';
import { prepare } from './prepare.mjs';
import { run, until } from './processes.mjs';
import { complain, Refusal } from './say.mjs';
import { onStop } from './stop.mjs';
import { supervise } from './supervise.mjs';

const HEALTHY_MS = 120_000;
/** A process that ends so often before the first healthy answer will not get better by itself. */
const HOPELESS = 3;

const PEOPLE_MADE = path.join(DATA, 'demo-people');
const VITE = ['node_modules/vite/bin/vite.js', '--clearScreen', 'false'];

const dev = process.argv.includes('--dev');
const env = process.env;

const ending = onStop();
try {
  await start();
} catch (error) {
  await ending.fail(() => complain(error));
}

async function start() {
  await prepare({ database: !env.DATABASE_URL, browser: false });
  const lock = takeLock(path.join(DATA, 'launcher.lock'));
  if ('heldBy' in lock)
    throw new Refusal(
      `Coppernoon runs in this checkout already: process ${lock.heldBy}. To stop it: kill ${lock.heldBy}`,
    );
  ending.lastly(lock.release);

  const port = await givenPort(lock.wasLeft);
  const [url] = await Promise.all([databaseUrl(), dev ? null : build()]);
  const password = env.DEMO === 'off' ? null : env.DEMO_PASSWORD || ownPassword();
  const settings = {
    ...env,
    NODE_ENV: env.NODE_ENV || (dev ? 'development' : 'production'),
    DATABASE_URL: url,
    PORT: String(dev ? await freePort(port + 1, 3000, 1000) : port),
    ...(password ? { DEMO_PASSWORD: password } : {}),
  };
  const address = env.BASE_URL || `http://localhost:${port}`;
  if (dev) Object.assign(settings, { BASE_URL: address, API_ADDRESS: `http://127.0.0.1:${settings.PORT}` });
  const inside = `http://${env.HOST && env.HOST !== '0.0.0.0' ? env.HOST : '127.0.0.1'}:${settings.PORT}`;

  const kept = [keep('web', entry('main'), settings), keep('worker', entry('worker'), settings)];
  if (dev) keep('client', [...VITE, '--port', String(port)], settings);
  await Promise.all([healthy(inside, kept), password ? demoPeople(settings) : null]);
  if (password) await command('demo', [inside], settings);
  process.stdout.write(
    `Coppernoon is ready at ${address.replace(/\/$/, '')}\n${password ? `demo password: ${password}\n` : ''}`,
  );
}

/** @param {boolean} wasKilled our predecessor was, and what it started takes a moment to end */
async function givenPort(wasKilled) {
  const port = Number(env.PORT || 3000);
  if (!Number.isInteger(port) || port < 0 || port > 65_535)
    throw new Refusal(`PORT is ${JSON.stringify(env.PORT)}; it must be a whole number from 0 to 65535.`);
  if (port === 0) return freePort(randomBytes(2).readUInt16LE(), 30_000, 2000);
  const free = async () => (await isFree(port, env.HOST || '127.0.0.1')) && (await isFree(port, '::1'));
  if (!(await until(free, wasKilled ? 12_000 : 0, 200)))
    throw new Refusal(
      `Port ${port} is taken by ${holderOf(port) ?? 'an unknown process'}. End it, or choose another port:\n  PORT=${port + 1} npm start`,
    );
  return port;
}

async function databaseUrl() {
  if (env.DATABASE_URL) return env.DATABASE_URL;
  const server = await openPostgres(path.join(DATA, 'postgres'));
  return server.url('coppernoon');
}

/** The demo people's password, made once per data folder. */
function ownPassword() {
  const file = path.join(DATA, 'demo-password');
  if (!fs.existsSync(file)) {
    const letters = 'abcdefghijkmnpqrstuvwxyz23456789';
    const drawn = [...randomBytes(20)].map((byte) => letters[byte % letters.length]).join('');
    fs.writeFileSync(file, `${drawn.replace(/(.{5})(?=.)/g, '$1-')}\n`, { mode: 0o600 });
  }
  return fs.readFileSync(file, 'utf8').trim();
}

/** How an entry is run: its bundle, or its source and again whenever that changes. */
function entry(name, { watch = true } = {}) {
  if (!dev) return ['--enable-source-maps', path.join(DIST, 'server', `${name}.js`)];
  return ['node_modules/tsx/dist/cli.mjs', ...(watch ? ['watch', '--clear-screen=false'] : []), ENTRIES[name]];
}

function keep(name, args, settings) {
  const log = logFile(path.join(DATA, `${name}.log`));
  const handle = supervise(`${name} process`, () => {
    const child = spawn(process.execPath, args, {
      cwd: ROOT,
      env: settings,
      detached: true,
      stdio: ['ignore', dev ? 2 : 'pipe', dev ? 2 : 'pipe'],
    });
    for (const stream of [child.stdout, child.stderr]) stream?.on('data', (piece) => log.write(piece));
    return child;
  });
  return { name, log: log.file, handle };
}

async function healthy(inside, kept) {
  const hopeless = () => kept.find(({ handle }) => handle.ends >= HOPELESS);
  const isHealthy = async () => {
    try {
      const answer = await fetch(`${inside}/api/health`, { signal: AbortSignal.timeout(2000) });
      return answer.ok && (await answer.json()).status === 'ok';
    } catch {
      return false;
    }
  };
  const well = await until(async () => hopeless() || (await isHealthy()), HEALTHY_MS, 50);
  const lost = hopeless() ?? (well ? null : kept[0]);
  if (lost) throw new Refusal(`The ${lost.name} process does not start. The end of ${lost.log}:\n${tail(lost.log)}`);
}

/** Makes the demo's people, unless that was done for this database and password. */
async function demoPeople(settings) {
  const wanted = createHash('sha256')
    .update(`${env.DATABASE_URL ?? ''}\n${settings.DEMO_PASSWORD}`)
    .digest('hex');
  if (fs.existsSync(PEOPLE_MADE) && fs.readFileSync(PEOPLE_MADE, 'utf8') === wanted) return;
  await command('people', [], settings);
  fs.writeFileSync(PEOPLE_MADE, wanted, { mode: 0o600 });
}

/** Runs a command of the demo to its end; what it says goes to our error stream. */
async function command(name, args, settings) {
  const { code } = await run(process.execPath, [...entry(name, { watch: false }), ...args], {
    cwd: ROOT,
    env: settings,
  });
  if (code === 0) return;
  // Should its people be the reason, the next start makes them anew.
  fs.rmSync(PEOPLE_MADE, { force: true });
  throw new Refusal('The demo could not be loaded; the reason stands above. Without it: DEMO=off npm start');
}
