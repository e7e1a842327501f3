import type { Layer } from '../../shared/energy/layer.ts';
import { encodeLayer, hashOf, patchIntervals } from '../readings/block.ts';
import { blockKey, REGISTER_REACH_DAYS, USUAL_REACH_DAYS } from '../readings/readings.service.ts';
import type { StoredBlock } from '../readings/readings.service.ts';

const DAY_MS = 86_400_000;

/** Takes the layers of a log as they are read and gives its blocks once the intervals are known. */
export class BlockBuilder {
  private encoded: { utcDay: number; data: Uint8Array }[] = [];
  /** First and last instant at which a register was read, by UTC day. */
  private readonly registerDays = new Map<number, { first: number; last: number }>();
  registers = false;

  add(layer: Layer): void {
    this.encoded.push({ utcDay: layer.utcDay, data: encodeLayer(layer) });
    if (layer.columns.some(({ kind }) => kind === 'register')) this.watchRegisters(layer);
  }

  /** Forgets everything. */
  clear(): void {
    this.encoded = [];
    this.registerDays.clear();
    this.registers = false;
  }

  /**
   * The blocks, in order of their days.
   * @param intervals nominal interval of each column, seconds
   */
  blocks(intervals: readonly number[]): StoredBlock[] {
    return this.encoded
      .sort((a, b) => a.utcDay - b.utcDay)
      .map(({ utcDay, data }) => {
        patchIntervals(data, intervals);
        return { utcDay, data, hash: hashOf(data) };
      });
  }

  /** How far, in days, a reading can weigh on figures: as far as it is bridged, or a register's step goes. */
  reachDays(intervals: readonly number[]): number {
    const bridge = Math.ceil((3 * Math.max(0, ...intervals) * 1000) / DAY_MS) + 1;
    const step = Math.ceil(this.longestRegisterStep() / DAY_MS) + 1;
    return Math.min(REGISTER_REACH_DAYS, Math.max(USUAL_REACH_DAYS, bridge, step));
  }

  private watchRegisters({ utcDay, instants, columns }: Layer): void {
    this.registers = true;
    let first = Infinity;
    let last = -Infinity;
    for (const { kind, values } of columns) {
      if (kind !== 'register') continue;
      const from = values.findIndex((value) => value === value);
      if (from < 0) continue;
      first = Math.min(first, instants[from]);
      last = Math.max(last, instants[values.findLastIndex((value) => value === value)]);
    }
    if (last >= first) this.registerDays.set(utcDay, { first, last });
  }

  /** Within a day no step is longer than the day; between days it may be any length. */
  private longestRegisterStep(): number {
    let longest = 0;
    let last = NaN;
    for (const day of [...this.registerDays.keys()].sort((a, b) => a - b)) {
      const { first, last: end } = this.registerDays.get(day)!;
      if (first - last > longest) longest = first - last;
      last = end;
    }
    return longest;
  }
}

/** Blocks by the key under which they are looked for. */
export function atHand(blocks: readonly StoredBlock[]): Map<string, Uint8Array> {
  return new Map(blocks.map(({ utcDay, hash, data }) => [blockKey(utcDay, hash), data]));
}
