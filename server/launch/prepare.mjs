import fs from 'node:fs';
import path from 'node:path';
import { withLock } from './lock.mjs';
import { DATA, ROOT } from './paths.mjs';
import { findPostgres } from './postgres.mjs';
import { run } from './processes.mjs';
import { Refusal, say } from './say.mjs';

export const CHROMIUM = '/usr/bin/chromium';

/**
 * Puts in place what is missing: PostgreSQL and Chromium from Debian's packages, the npm packages of the lock.
 * What is there already costs a look, no network.
 *
 * @param {{ database: boolean, browser: boolean }} needs
 */
export async function prepare({ database, browser }) {
  if (Number(process.versions.node.split('.')[0]) !== 20)
    say(`Coppernoon is made for Node 20; this is ${process.version}.`);
  makeDataFolder();
  const debian = [
    ...(database && !findPostgres() ? ['postgresql'] : []),
    ...(browser && !fs.existsSync(CHROMIUM) ? ['chromium'] : []),
  ];
  if (debian.length === 0 && missingPackages().length === 0) return;
  await withLock(
    path.join(DATA, 'prepare.lock'),
    (pid) => say(`Process ${pid} is installing in this checkout; waiting for it.`),
    async () => {
      if (debian.length > 0) await installDebian(debian);
      const missing = missingPackages();
      if (missing.length > 0) await installNpm(missing);
    },
  );
}

function makeDataFolder() {
  try {
    fs.mkdirSync(DATA, { recursive: true });
    fs.accessSync(DATA, fs.constants.W_OK);
  } catch (error) {
    throw new Refusal(
      `Everything is kept in ${DATA}, and that folder cannot be written (${error.code}). Start as the user ` +
        'that owns it, or from a checkout of your own.',
    );
  }
}

async function installDebian(names) {
  const root = process.getuid() === 0;
  const command = `apt-get update && ${root ? '' : 'sudo '}apt-get install -y --no-install-recommends ${names.join(' ')}`;
  const byHand = root ? command : `sudo ${command}`;
  if (!root)
    throw new Refusal(
      `Missing from this machine: ${names.join(', ')}. Only root can install. Run, then start again:\n  ${byHand}`,
    );
  if (names.includes('postgresql')) keepMainClusterAway();
  say(`Installing from Debian: ${names.join(', ')} …`);
  const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
  const options = ['-y', '--no-install-recommends', '-o', 'Dpkg::Options::=--force-confold', '-o', 'Dpkg::Use-Pty=0'];
  const install = () => run('apt-get', ['install', ...options, ...names], { env, quiet: true, mustFinish: true });
  // On a fresh machine the lists are empty and the first try fails at once, without a network.
  let last = await install();
  if (last.code !== 0) {
    last = await run('apt-get', ['update'], { env, quiet: true, mustFinish: true });
    if (last.code === 0) last = await install();
  }
  const present = { postgresql: () => findPostgres() !== null, chromium: () => fs.existsSync(CHROMIUM) };
  const absent = names.filter((name) => !present[name]());
  if (last.code !== 0 || absent.length > 0)
    throw new Refusal(
      `${last.output.trim().split('\n').slice(-12).join('\n')}\n\nThis could not be installed from Debian: ` +
        `${(absent.length > 0 ? absent : names).join(', ')}. With a network, run:\n  ${byHand}`,
    );
}

/** Debian's package would start a database for everyone; ours is the only one we want. An existing setting stays. */
function keepMainClusterAway() {
  const file = '/etc/postgresql-common/createcluster.conf';
  if (fs.existsSync(file)) return;
  fs.mkdirSync(path.dirname(file), { recursive: true });
  fs.writeFileSync(file, 'create_main_cluster = false\n');
}

async function installNpm(missing) {
  say(`Installing the npm packages of package-lock.json (${told(missing)}) …`);
  const npm = (...args) =>
    run('npm', [...args, '--prefer-offline', '--no-update-notifier'], { cwd: ROOT, quiet: true });
  // Without a network `npm ci` takes minutes to say so, and takes away first what is there. One package tells at once.
  let { code, output } = await npm('cache', 'add', missing[0], '--fetch-retries=1');
  if (code === 0) ({ code, output } = await npm('ci', '--include=dev', '--no-audit', '--no-fund'));
  if (code === 0) return;
  throw new Refusal(
    `${output.trim().split('\n').slice(-12).join('\n')}\n\nThe npm packages could not be installed; ` +
      `missing or of another version: ${told(missingPackages())}. With a network, run:\n  cd ${ROOT} && npm ci --include=dev`,
  );
}

function told(names) {
  return names.length > 5 ? `${names.slice(0, 5).join(', ')} and ${names.length - 5} more` : names.join(', ');
}

/**
 * The packages of the lock that are not installed as it says, by npm's own record of what it installed, each as
 * `name@version`. Packages for other machines are left out of account.
 */
export function missingPackages() {
  const wanted = readLock(path.join(ROOT, 'package-lock.json'));
  const there = readLock(path.join(ROOT, 'node_modules/.package-lock.json'));
  return Object.entries(wanted)
    .filter(([place, entry]) => place !== '' && isForUs(entry) && !isSame(entry, there[place], place))
    .map(([place, { name, version }]) => `${name ?? place.replace(/^.*node_modules\//, '')}@${version}`);
}

function readLock(file) {
  try {
    return JSON.parse(fs.readFileSync(file, 'utf8')).packages;
  } catch (error) {
    if (error.code === 'ENOENT') return {};
    throw error;
  }
}

function isForUs({ optional, os, cpu, libc }) {
  if (!os && !cpu) return !optional;
  const fits = (list, own) => !list || list.includes(own);
  return fits(os, process.platform) && fits(cpu, process.arch) && fits(libc, 'glibc');
}

function isSame(wanted, there, place) {
  return (
    there?.version === wanted.version &&
    there?.integrity === wanted.integrity &&
    fs.existsSync(path.join(ROOT, place, 'package.json'))
  );
}
