import type { Written } from './logs.ts';

/**
 * A naive second reading of the rules that turn readings into figures: looks up what each log says at one instant by
 * searching its rows, and adds up ten seconds at a time. Slow, and written apart from the code that it judges.
 */
export const TICK = 10_000;

const FIVE_MINUTES = 300_000;
const SIX_HOURS = 21_600_000;
const DAY = 86_400_000;

export interface OracleLog extends Written {
  log: number;
}

interface Says {
  value: number;
  /** Whether a neighbouring row, and not the nominal interval, bounds the time. */
  bounded: boolean;
}

/** What one log says at an instant, `null` where its rows leave it open. Energies and registers as W. */
export function says(
  { kind, stamp = 'start', hold = null, intervalSeconds = 0, rows }: OracleLog,
  x: number,
): Says | null {
  const nominal = intervalSeconds * 1000;
  const bridge = Math.max(3 * nominal, FIVE_MINUTES);
  let before = -1;
  for (let i = 0; i < rows.length && rows[i][0] <= x; i++) before = i;
  const a = rows[before];
  const b = rows[before + 1];
  const near = a !== undefined && b !== undefined && b[0] - a[0] <= bridge;
  const straight = (): Says => ({ value: a[1] + ((b[1] - a[1]) * (x - a[0])) / (b[0] - a[0]), bounded: true });
  if (hold === 'toNext')
    return a && b && x < a[0] + (kind === 'level' ? SIX_HOURS : DAY) ? { value: a[1], bounded: true } : null;
  if (kind === 'register') {
    if (!a || !b || b[0] - a[0] > SIX_HOURS) return null;
    return { value: ((b[1] - a[1]) * 3.6e9) / (b[0] - a[0]), bounded: true };
  }
  if (kind === 'level' || (kind === 'power' && stamp === 'instant')) return near ? straight() : null;
  if (kind === 'energy') {
    const own = stamp === 'start' ? a : b;
    const other = stamp === 'start' ? b : a;
    if (!own) return null;
    const step = other ? Math.abs(own[0] - other[0]) : Infinity;
    const long = Math.min(step, nominal);
    if (Math.abs(x - own[0]) > long) return null;
    return { value: (own[1] * 3.6e9) / long, bounded: step <= bridge };
  }
  if (kind === 'power' && stamp === 'end') {
    if (!b) return null;
    if (near) return { value: b[1], bounded: true };
    return x >= b[0] - nominal ? { value: b[1], bounded: false } : null;
  }
  if (!a) return null;
  if (near) return { value: a[1], bounded: true };
  return x < a[0] + nominal ? { value: a[1], bounded: false } : null;
}

/** The rule of spans at one instant. */
export function spoken(logs: readonly OracleLog[], x: number): number | null {
  const all = logs.map((log) => ({ log, said: says(log, x) }));
  const known = all.filter((entry): entry is { log: OracleLog; said: Says } => entry.said !== null);
  const bounded = known.filter(({ said }) => said.bounded);
  const may = bounded.length ? bounded : known;
  if (!may.length) return null;
  const finest = Math.min(...may.map(({ log }) => log.intervalSeconds ?? 0));
  const fine = may.filter(({ log }) => (log.intervalSeconds ?? 0) <= 2 * finest);
  return fine.reduce((last, entry) => (entry.log.log > last.log.log ? entry : last)).said.value;
}

/** kWh and covered share of [from, to), tick by tick. */
export function addedUp(
  logs: readonly OracleLog[],
  from: number,
  to: number,
): { kwh: number | null; coverage: number } {
  let sum = 0;
  let ticks = 0;
  for (let t = from; t < to; t += TICK) {
    const value = spoken(logs, t + TICK / 2);
    if (value === null) continue;
    sum += value;
    ticks++;
  }
  return { kwh: ticks ? (sum * TICK) / 3.6e9 : null, coverage: (ticks * TICK) / (to - from) };
}
