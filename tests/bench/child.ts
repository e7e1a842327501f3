import { CONTENDERS } from './contenders.ts';

/** One contender in a process of its own, told by its parent what to do. */
const make = CONTENDERS[process.argv[2]];
if (!make) throw new Error(`There is no contender ${process.argv[2]}.`);
const contender = await make();
process.on('message', (message) => {
  void answer(message as 'round' | 'close').catch((error: unknown) => {
    process.send?.({ error: error instanceof Error ? (error.stack ?? error.message) : String(error) });
  });
});

async function answer(message: 'round' | 'close'): Promise<void> {
  if (message === 'close') {
    await contender.close();
    process.exit(0);
  }
  await contender.before?.();
  globalThis.gc?.();
  const started = performance.now();
  const said = await contender.run();
  const ms = performance.now() - started;
  await contender.check?.();
  process.send?.({ ms, ...said });
}
process.send?.({ ready: true });
