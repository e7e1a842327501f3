import { setImmediate as turn } from 'node:timers/promises';
import type { ReadingsAnswer } from '../../shared/api/day.ts';
import { PIECE } from '../../shared/energy/layer.ts';
import type { LogLayer, Trace } from '../../shared/energy/layer.ts';
import { longestBridge } from '../../shared/energy/pieces.ts';
import { effectiveTraces } from '../../shared/energy/trace.ts';
import { DAY_MS } from '../../shared/time/zone.ts';
import { QUANTITY } from '../../shared/units/channels.ts';
import type { Channel, Unit } from '../../shared/units/channels.ts';
import { toBase } from '../../shared/units/convert.ts';
import type { Database } from '../database/connection.ts';
import { badFields } from '../http/problems.ts';
import { workDone } from '../jobs/work.ts';
import { daySpan, layersAround, reachesOf, withReadings } from './readings.service.ts';
import { Thinner } from './thin.ts';

const USUAL_POINTS = 2000;
/** So many UTC days are held in memory at once. */
const STRETCH_DAYS = 32;
const PATIENCE_MS = 20_000;

export interface SeriesQuery {
  channel: Channel;
  /** Instants; `to` excluded. */
  from: string;
  to: string;
  /** How many points at most. */
  points?: number;
  /** Values as written, in their own unit, instead of the effective trace. */
  asRead: boolean;
}

/**
 * One channel as a line: what the logs say together, energies and registers as mean power, thinned to so many points
 * with its extremes kept; what is not known is a gap.
 * @throws Problem 422 if `to` does not lie after `from`
 */
export async function readSeries(
  db: Database,
  propertyId: string,
  { channel, from: fromText, to: toText, points = USUAL_POINTS, asRead }: SeriesQuery,
): Promise<ReadingsAnswer> {
  const from = Date.parse(fromText);
  const to = Date.parse(toText);
  if (to <= from) throw badFields([{ path: 'to', message: 'this instant does not lie after “from”' }]);
  await workDone(db, propertyId, PATIENCE_MS);
  // The grid is split into the two, so that both come from it.
  const only = new Set<Channel>(channel === 'export' || channel === 'import' ? [channel, 'grid'] : [channel]);
  const line = new Thinner(from, to, points);
  const drawn = asRead ? new AsWritten(channel, line) : new AsTrace(channel, line);
  await withReadings(db, async (scope) => {
    const span = await daySpan(scope, propertyId);
    if (!span) return;
    const reaches = await reachesOf(scope, propertyId);
    const first = Math.max(Math.floor(from / DAY_MS), span.first - 1);
    const last = Math.min(Math.floor((to - 1) / DAY_MS), span.last + 1);
    for (let day = first; day <= last; day += STRETCH_DAYS) {
      const end = Math.min(day + STRETCH_DAYS - 1, last);
      const layers = await layersAround(scope, propertyId, { from: day, to: end }, reaches, { only });
      drawn.draw(layers, Math.max(from, day * DAY_MS), Math.min(to, (end + 1) * DAY_MS));
      await turn();
    }
  });
  drawn.end();
  return { channel, unit: drawn.unit, points: line.result() };
}

/** What the logs say together. */
class AsTrace {
  unit: string;
  private lastEnd = NaN;
  private lastValue = NaN;

  constructor(
    private readonly channel: Channel,
    private readonly line: Thinner,
  ) {
    const { [channel]: quantity } = QUANTITY;
    this.unit = quantity === 'temperature' ? 'C' : quantity === 'state' ? 'state' : 'W';
  }

  draw(layers: readonly LogLayer[], from: number, to: number): void {
    const trace = effectiveTraces(layers).traces.get(this.channel);
    if (!trace) return;
    if (trace.volumetric) this.unit = 'm3/h';
    this.pieces(trace, from, to);
  }

  end(): void {
    if (this.lastEnd === this.lastEnd) this.line.add(this.lastEnd, this.lastValue);
  }

  private pieces({ t0, t1, v0, v1, flags, length }: Trace, from: number, to: number): void {
    const { line } = this;
    for (let i = 0; i < length && t0[i] < to; i++) {
      if (t1[i] <= from || flags[i] & PIECE.spread) continue;
      const at = Math.max(t0[i], from);
      const value = at === t0[i] ? v0[i] : v0[i] + ((v1[i] - v0[i]) * (at - t0[i])) / (t1[i] - t0[i]);
      if (at !== this.lastEnd) {
        if (this.lastEnd === this.lastEnd) {
          line.add(this.lastEnd, this.lastValue);
          line.gap(this.lastEnd);
        }
        line.add(at, value);
      } else if (at === t0[i]) line.add(at, value);
      const end = Math.min(t1[i], to);
      this.lastEnd = end;
      this.lastValue = end === t1[i] ? v1[i] : v0[i] + ((v1[i] - v0[i]) * (end - t0[i])) / (t1[i] - t0[i]);
    }
  }
}

/** Readings as they are written, of all logs; where several have one at the same instant, the last accepted speaks. */
class AsWritten {
  private written: Unit | null = null;
  private last = NaN;
  private bridge = 0;

  constructor(
    private readonly channel: Channel,
    private readonly line: Thinner,
  ) {}

  get unit(): string {
    return this.written ?? (QUANTITY[this.channel] === 'temperature' ? 'C' : 'W');
  }

  draw(layers: readonly LogLayer[], from: number, to: number): void {
    const found: { at: number; value: number; log: number; bridge: number }[] = [];
    for (const { log, instants, columns } of layers) {
      const own = columns.filter(({ channel }) => channel === this.channel);
      if (own.length === 0) continue;
      const bridge = longestBridge(Math.max(...own.map(({ intervalSeconds }) => intervalSeconds)));
      for (let i = 0; i < instants.length; i++) {
        if (instants[i] < from || instants[i] >= to) continue;
        let value = 0;
        for (const column of own) value += this.inUnit(column.values[i] / 10 ** (column.scale ?? 0), column.unit);
        if (value === value) found.push({ at: instants[i], value, log, bridge });
      }
    }
    found.sort((a, b) => a.at - b.at || a.log - b.log);
    found.forEach(({ at, value, bridge }, i) => {
      if (found[i + 1]?.at === at) return;
      if (at - this.last > Math.max(bridge, this.bridge)) this.line.gap(this.last);
      this.line.add(at, value);
      this.last = at;
      this.bridge = bridge;
    });
  }

  end(): void {}

  /** The unit of the first reading is the line's; others are turned into it. */
  private inUnit(value: number, unit: Unit): number {
    this.written ??= unit;
    if (unit === this.written) return value;
    const own = toBase(unit);
    const line = toBase(this.written);
    return (value * own.factor + own.offset - line.offset) / line.factor;
  }
}
