import { fork } from 'node:child_process';
import type { ChildProcess } from 'node:child_process';
import path from 'node:path';

export type Round = Record<string, number> & { ms: number };

const CHILD = path.resolve(import.meta.dirname, 'child.ts');

/** A contender in a long-lived process of its own. */
export class Runner {
  private constructor(
    readonly name: string,
    private readonly child: ChildProcess,
  ) {}

  static async start(name: string): Promise<Runner> {
    const child = fork(CHILD, [name], { execArgv: ['--expose-gc', '--import', 'tsx'], stdio: 'inherit' });
    const runner = new Runner(name, child);
    await runner.said();
    return runner;
  }

  async round(): Promise<Round> {
    this.child.send('round');
    return this.said();
  }

  async stop(): Promise<void> {
    const ended = new Promise((resolve) => this.child.once('exit', resolve));
    this.child.send('close');
    await ended;
  }

  private said(): Promise<Round> {
    return new Promise((resolve, reject) => {
      const gone = () => reject(new Error(`${this.name} ended by itself.`));
      this.child.once('exit', gone);
      this.child.once('message', (message: Round & { error?: string }) => {
        this.child.off('exit', gone);
        if (message.error) reject(new Error(`${this.name}: ${message.error}`));
        else resolve(message);
      });
    });
  }
}

export const median = (values: readonly number[]) => {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
};

export interface Measured {
  ratio: number;
  /** The least and the greatest ratio of a pair. */
  spread: [number, number];
  ms: number;
  yardstickMs: number;
  /** The yardstick's median over its minimum. */
  noise: number;
  rounds: Round[];
}

/** Above this the yardstick itself wavers too much to judge by. */
export const TOO_NOISY = 1.3;

export interface Pairing {
  name: string;
  yardstick: string;
  warmUps: number;
  pairs: number;
  /** Which of a round's figures counts; its time without one. */
  figure?: string;
}

/** Two contenders take turns; the median of the ratios of their pairs. Noisy runs are repeated, three at most. */
export async function measure({ name, yardstick, warmUps, pairs, figure = 'ms' }: Pairing): Promise<Measured> {
  const [ours, theirs] = await Promise.all([Runner.start(name), Runner.start(yardstick)]);
  try {
    let best: Measured | null = null;
    for (let attempt = 0; attempt < 3; attempt++) {
      for (let i = 0; i < warmUps; i++) {
        await theirs.round();
        await ours.round();
      }
      const rounds: Round[] = [];
      const yards: number[] = [];
      for (let i = 0; i < pairs; i++) {
        yards.push((await theirs.round()).ms);
        rounds.push(await ours.round());
      }
      const ratios = rounds.map((round, i) => round[figure] / yards[i]);
      const measured: Measured = {
        ratio: median(ratios),
        spread: [Math.min(...ratios), Math.max(...ratios)],
        ms: median(rounds.map((round) => round[figure])),
        yardstickMs: median(yards),
        noise: median(yards) / Math.min(...yards),
        rounds,
      };
      if (!best || measured.noise < best.noise) best = measured;
      if (best.noise <= TOO_NOISY) break;
    }
    return best!;
  } finally {
    await Promise.all([ours.stop(), theirs.stop()]);
  }
}
