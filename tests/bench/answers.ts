import autocannon from 'autocannon';
import { fork } from 'node:child_process';
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { setTimeout as wait } from 'node:timers/promises';
import { median } from './pairs.ts';
import { startProduct } from './product.ts';

/** What one answer takes, ms, called over and over until told to stop. */
async function times(url: string, headers: Record<string, string>, going: () => boolean): Promise<number[]> {
  const all: number[] = [];
  while (going()) {
    const started = performance.now();
    await (await fetch(url, { headers })).arrayBuffer();
    all.push(performance.now() - started);
    await wait(2);
  }
  return all;
}

/** The worst answer of other requests while year files are uploaded and read, over the idle p99. */
export async function worstDuringUpload(folder: string, uploads: number) {
  const product = await startProduct();
  try {
    const csv = readFileSync(path.join(folder, 'year.csv'));
    const id = await product.place.property();
    const url = `${product.base}/api/properties/${id}`;
    let left = 600;
    await times(url, product.headers, () => left-- > 0);
    left = 1500;
    const idle = (await times(url, product.headers, () => left-- > 0)).sort((a, b) => a - b);
    const p99 = idle[Math.floor(idle.length * 0.99)];
    const worst: number[] = [];
    for (let i = 0; i < uploads; i++) {
      const other = await product.place.property();
      let done = false;
      const upload = product
        .send(other, csv)
        .then((log) => product.kept(log))
        .finally(() => (done = true));
      worst.push(Math.max(...(await times(url, product.headers, () => !done))));
      await upload;
    }
    return { ratio: median(worst) / p99, p99, worst: median(worst) };
  } finally {
    await product.close();
  }
}

/** Requests per second of a one-row answer over those of a hello by the same framework. */
export async function answerRate(seconds: number) {
  const product = await startProduct({ worker: false });
  const hello = fork(path.resolve(import.meta.dirname, 'hello.ts'), {
    execArgv: ['--import', 'tsx'],
    stdio: 'inherit',
  });
  try {
    const port = await new Promise<number>((resolve) => hello.once('message', (message) => resolve(Number(message))));
    const rate = async (url: string, headers: Record<string, string>) =>
      (await autocannon({ url, headers, connections: 10, duration: seconds })).requests.average;
    const ours = `${product.base}/api/session`;
    const theirs = `http://127.0.0.1:${port}/`;
    await rate(ours, product.headers);
    await rate(theirs, {});
    const pairs: { ours: number; hello: number }[] = [];
    for (let i = 0; i < 5; i++) pairs.push({ hello: await rate(theirs, {}), ours: await rate(ours, product.headers) });
    return {
      ratio: median(pairs.map((pair) => pair.ours / pair.hello)),
      ours: median(pairs.map((pair) => pair.ours)),
      hello: median(pairs.map((pair) => pair.hello)),
    };
  } finally {
    hello.kill();
    await product.close();
  }
}
