import { spawnSync } from 'node:child_process';
import fs from 'node:fs';
import path from 'node:path';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { query } from '../support/query.ts';
import {
  databaseOf,
  dataFolder,
  eventually,
  isHealthy,
  launch,
  processesOf,
  processOf,
  takenPort,
  type Launched,
} from './launched.ts';

const POSTGRES = /\/bin\/postgres /;
const GUARD = /guard\.sh/;

describe('npm start', { timeout: 120_000 }, () => {
  const folder = dataFolder();
  let product: Launched | null = null;

  const start = async (settings?: Record<string, string>) => {
    product = launch(folder, settings);
    return { product, address: await product.ready };
  };

  beforeAll(async () => {
    // The first start makes the database and, after a change, builds.
    const { product: first } = await start();
    first.kill('SIGINT');
    await first.ended;
  }, 240_000);
  afterAll(() => fs.rmSync(folder, { recursive: true, force: true }));

  describe('once it runs', () => {
    let now: Awaited<ReturnType<typeof start>> | null = null;
    const running = () => now ?? expect.fail('it was not started');

    beforeAll(async () => {
      now = await start();
    });
    afterAll(async () => {
      now?.product.kill('SIGTERM');
      await now?.product.ended;
    });

    it('when all is in place then it installs, makes and builds nothing, and prints where it is', async () => {
      expect(await isHealthy(running().address)).toBe(true);
      expect(running().product.out).toBe(`Coppernoon is ready at ${running().address}\n`);
      expect(running().product.err).toBe('');
    });

    it('when the database is killed then it comes back with all that was committed', async () => {
      await query(databaseOf(folder), 'create table if not exists kept (n int)');
      await query(databaseOf(folder), 'insert into kept values (1), (2), (3)');
      const before = processOf(folder, POSTGRES).pid;
      process.kill(before, 'SIGKILL');
      await eventually(() => processesOf(folder).some(({ pid, command }) => POSTGRES.test(command) && pid !== before));
      await eventually(() => isHealthy(running().address));
      expect(await query(databaseOf(folder), 'select n from kept order by n')).toEqual([{ n: 1 }, { n: 2 }, { n: 3 }]);
    });

    it.each(['main.js', 'worker.js'])('when %s is killed then another takes its place', async (name) => {
      const before = processOf(folder, new RegExp(name)).pid;
      process.kill(before, 'SIGKILL');
      await eventually(() => processesOf(folder).some(({ pid, command }) => command.includes(name) && pid !== before));
      await eventually(() => isHealthy(running().address));
    });

    it('when it runs already then a second start names the first and leaves it alone', async () => {
      const second = launch(folder);
      expect(await second.ended).toBe(1);
      expect(second.err).toContain(`process ${running().product.pid}`);
      expect(await isHealthy(running().address)).toBe(true);
    });
  });

  describe('when it has to end or cannot start', () => {
    afterEach(async () => {
      product?.kill('SIGTERM');
      await product?.ended;
    });

    it.each(['SIGTERM', 'SIGINT', 'SIGHUP'] as const)(
      'when it gets %s then it ends well and leaves no process',
      async (signal) => {
        const { product } = await start();
        expect(processesOf(folder).map(({ command }) => command)).toEqual(
          expect.arrayContaining([
            expect.stringMatching(POSTGRES),
            expect.stringMatching(/worker\.js/),
            expect.stringMatching(/main\.js/),
          ]),
        );
        product.kill(signal);
        expect(await product.ended).toBe(0);
        expect(processesOf(folder)).toEqual([]);
      },
    );

    it('when it is told to end while it still starts then it leaves no process', async () => {
      product = launch(folder);
      await eventually(() => processesOf(folder).some(({ command }) => POSTGRES.test(command)));
      product.kill('SIGTERM');
      expect(await product.ended).toBe(0);
      expect(product.out).toBe('');
      expect(processesOf(folder)).toEqual([]);
    });

    it('when it is killed itself then all that it started ends too, and it can be started again', async () => {
      const { product } = await start();
      product.kill('SIGKILL');
      await product.ended;
      await eventually(() => processesOf(folder).length === 0);
      const { address } = await start();
      expect(await isHealthy(address)).toBe(true);
    });

    it('when everything was killed at once, as by a loss of power, then it can be started again', async () => {
      const { product } = await start();
      process.kill(processOf(folder, GUARD).pid, 'SIGKILL');
      for (const { pid } of processesOf(folder)) spawnSync('kill', ['-9', String(pid)]);
      await product.ended;
      expect(fs.existsSync(path.join(folder, 'postgres/postmaster.pid'))).toBe(true);
      const { address } = await start();
      expect(await isHealthy(address)).toBe(true);
    });

    it('when only its database was left running then it ends that one and starts its own', async () => {
      const { product } = await start();
      const left = processOf(folder, POSTGRES).pid;
      process.kill(processOf(folder, GUARD).pid, 'SIGKILL');
      product.kill('SIGKILL');
      await product.ended;
      for (const name of [/main\.js/, /worker\.js/]) process.kill(processOf(folder, name).pid, 'SIGKILL');
      const { address } = await start();
      expect(await isHealthy(address)).toBe(true);
      expect(processOf(folder, POSTGRES).pid).not.toBe(left);
    });

    it('when the port is taken then it says whose it is and leaves no process', async () => {
      const { port, free } = await takenPort();
      product = launch(folder, { PORT: String(port) });
      expect(await product.ended).toBe(1);
      expect(product.err).toContain(`Port ${port} is taken by process ${process.pid} (`);
      expect(product.out).toBe('');
      expect(processesOf(folder)).toEqual([]);
      await free();
    });

    it('when a setting cannot be used then it ends with the reason', async () => {
      product = launch(folder, { QUOTA_BYTES: 'plenty' });
      expect(await product.ended).toBe(1);
      expect(product.err).toContain('QUOTA_BYTES is "plenty"');
      expect(processesOf(folder)).toEqual([]);
    });
  });

  it('when the owner of the database cannot enter the folders above then it starts all the same', async (context) => {
    if (process.getuid?.() !== 0) context.skip('only root hands the database to another user');
    const closed = dataFolder();
    fs.chmodSync(closed, 0o700);
    const inside = path.join(closed, 'data');
    const below = launch(inside);
    expect(await isHealthy(await below.ready)).toBe(true);
    below.kill('SIGTERM');
    expect(await below.ended).toBe(0);
    fs.rmSync(closed, { recursive: true, force: true });
  });
});
