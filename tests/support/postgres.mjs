import fs from 'node:fs';
import path from 'node:path';
import { endLeftover, openPostgres } from '../../server/launch/postgres.mjs';
import { DATA } from '../../server/launch/paths.mjs';
import { isAlive } from '../../server/launch/processes.mjs';

const PLACE = path.join(DATA, 'test');

/**
 * Starts a PostgreSQL for one run of tests, as it is shipped (fsync on), in a folder of its own that goes with it.
 *
 * @returns {Promise<{ url: string, stop: () => Promise<void> }>} `url` leads to its empty first database
 */
export async function startThrowaway() {
  await sweep();
  const folder = path.join(PLACE, `run-${process.pid}-database`);
  const server = await openPostgres(path.join(folder, 'postgres'));
  return {
    url: server.url('coppernoon'),
    stop: async () => {
      await server.stop();
      fs.rmSync(folder, { recursive: true, force: true });
    },
  };
}

/** Takes away what runs that were killed have left. */
async function sweep() {
  for (const name of fs.existsSync(PLACE) ? fs.readdirSync(PLACE) : []) {
    const pid = Number(/^run-(\d+)/.exec(name)?.[1]);
    if (!pid || isAlive(pid)) continue;
    await endLeftover(path.join(PLACE, name, 'postgres'));
    fs.rmSync(path.join(PLACE, name), { recursive: true, force: true });
  }
}
