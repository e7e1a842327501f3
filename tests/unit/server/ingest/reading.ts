import type { ColumnPlan } from '../../../../shared/api/plan.ts';
import type { Layer } from '../../../../shared/energy/layer.ts';
import { readLog, type ReaderChoice, type ReadResult } from '../../../../server/ingest/read.ts';

export interface Read {
  result: ReadResult;
  layers: Layer[];
  rejected: { line: number; column: string | null; reason: string; text: string }[];
  /** Per plan column the readings as `[instant, value as written]`. */
  readings: [number, number][][];
  restarts: number;
}

/** Bytes in pieces of a size. */
export async function* pieces(bytes: Uint8Array, size: number): AsyncGenerator<Uint8Array> {
  for (let at = 0; at < bytes.length; at += size) yield bytes.subarray(at, at + size);
}

/** Reads a text or bytes by a plan and gathers all that comes out. */
export async function read(
  content: string | Uint8Array,
  plan: ColumnPlan,
  options: { choice?: ReaderChoice; size?: number; restart?: boolean } = {},
): Promise<Read> {
  const bytes = typeof content === 'string' ? new TextEncoder().encode(content) : content;
  const got: Omit<Read, 'result'> = { layers: [], rejected: [], readings: plan.columns.map(() => []), restarts: 0 };
  const sink = {
    layer: (layer: Layer): void => void got.layers.push(layer),
    rejected: (line: number, column: string | null, reason: string, text: string): void =>
      void got.rejected.push({ line, column, reason, text }),
  };
  const restart = (): void => {
    got.layers = [];
    got.rejected = [];
    got.restarts++;
  };
  const result = await readLog(
    () => pieces(bytes, options.size ?? 4096),
    plan,
    { timeZone: plan.time.zone },
    options.restart === false ? sink : { ...sink, restart },
    options.choice,
  );
  for (const layer of [...got.layers].sort((a, b) => a.utcDay - b.utcDay)) {
    layer.columns.forEach((column, c) => {
      column.values.forEach((value, i) => {
        if (Number.isNaN(value)) return;
        const written = column.scale === null ? value : value / 10 ** column.scale;
        got.readings[c].push([layer.instants[i], written]);
      });
    });
  }
  return { result, ...got };
}

/** A plan for `time,export` in ISO and UTC, with what a test changes. */
export function planOf(change: Partial<ColumnPlan> = {}): ColumnPlan {
  return {
    encoding: 'utf-8',
    delimiter: ',',
    decimal: '.',
    headerLine: 1,
    time: { columns: ['time'], format: 'iso', zone: 'UTC', stamp: 'start' },
    columns: [{ column: 'export', channel: 'export', kind: 'energy', unit: 'kWh', sign: 1 }],
    ...change,
  };
}
