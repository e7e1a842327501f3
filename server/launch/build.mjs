import { createHash } from 'node:crypto';
import fs from 'node:fs';
import path from 'node:path';
import { DATA, DIST, ROOT } from './paths.mjs';
import { withLock } from './lock.mjs';
import { run } from './processes.mjs';
import { complain, Refusal, say } from './say.mjs';

const PARTS = {
  client: ['src', 'shared', 'index.html', 'vite.config.ts', 'package-lock.json'],
  server: ['server', 'shared', 'samples/make', 'package-lock.json', 'server/launch/build.mjs'],
};

/** What runs by itself, by name: the two processes, and the two commands that bring the demo. */
export const ENTRIES = {
  main: 'server/main.ts',
  worker: 'server/worker.ts',
  people: 'server/accounts/people.ts',
  demo: 'samples/make/demo.ts',
};

/**
 * Builds what is older than its sources: the client by vite, the server by esbuild. Each part is built beside the
 * old one and takes its place when it is whole.
 *
 * @param {{ anyway?: boolean }} options `anyway` builds also what is up to date
 */
export async function build({ anyway = false } = {}) {
  const stale = () => Object.keys(PARTS).filter((part) => anyway || readStamp(part) !== stampOf(part));
  if (stale().length === 0) return;
  await withLock(
    path.join(DATA, 'build.lock'),
    (pid) => say(`Process ${pid} is building in this checkout; waiting for it.`),
    async () => {
      for (const part of stale()) {
        const started = performance.now();
        const stamp = stampOf(part);
        const fresh = path.join(DIST, `${part}.new`);
        fs.rmSync(fresh, { recursive: true, force: true });
        await BUILDERS[part](fresh);
        fs.rmSync(path.join(DIST, part), { recursive: true, force: true });
        fs.renameSync(fresh, path.join(DIST, part));
        fs.writeFileSync(stampFile(part), stamp);
        say(`Built the ${part} in ${((performance.now() - started) / 1000).toFixed(1)} s.`);
      }
    },
  );
}

const BUILDERS = {
  client: async (out) => {
    const vite = path.join(ROOT, 'node_modules/vite/bin/vite.js');
    const args = [vite, 'build', '--outDir', out, '--emptyOutDir', '--logLevel', 'warn'];
    const { code, output } = await run(process.execPath, args, { cwd: ROOT, quiet: true });
    if (code !== 0) throw new Refusal(`${output.trim()}\n\nThe client could not be built.`);
  },
  server: async (out) => {
    const esbuild = await import('esbuild');
    try {
      await esbuild.build({
        absWorkingDir: ROOT,
        entryPoints: serverEntries(),
        outdir: out,
        bundle: true,
        packages: 'external',
        platform: 'node',
        target: 'node20',
        format: 'esm',
        sourcemap: true,
        logLevel: 'silent',
      });
    } catch (error) {
      throw new Refusal(`${error.message}\n\nThe server could not be built.`);
    } finally {
      await esbuild.stop();
    }
  },
};

/** Each entry, and each file named `x.thread.ts`: a thread is a bundle of its own. */
function serverEntries() {
  const entries = { ...ENTRIES };
  for (const file of filesOf('server')) {
    const thread = /([^/]+\.thread)\.ts$/.exec(file)?.[1];
    if (thread) entries[thread] = file;
  }
  return entries;
}

function stampFile(part) {
  return path.join(DIST, `${part}.sources`);
}

function readStamp(part) {
  try {
    return fs.existsSync(path.join(DIST, part)) ? fs.readFileSync(stampFile(part), 'utf8') : null;
  } catch {
    return null;
  }
}

/** One hash of all that a part is built from. Contents, not times: a checkout sets those anew. */
function stampOf(part) {
  const hash = createHash('sha256');
  for (const file of PARTS[part].flatMap(filesOf))
    hash.update(`${file}\0`).update(fs.readFileSync(path.join(ROOT, file)));
  return hash.digest('hex');
}

function filesOf(place) {
  const whole = path.join(ROOT, place);
  if (!fs.existsSync(whole)) return [];
  if (fs.statSync(whole).isFile()) return [place];
  return fs
    .readdirSync(whole)
    .sort()
    .filter((name) => name !== 'launch')
    .flatMap((name) => filesOf(`${place}/${name}`));
}

if (process.argv[1] === import.meta.filename) {
  try {
    const { prepare } = await import('./prepare.mjs');
    await prepare({ database: false, browser: false });
    await build({ anyway: true });
  } catch (error) {
    complain(error);
    process.exitCode = 1;
  }
}
