import type { Kind } from '../units/channels.ts';
import { PIECE } from './layer.ts';

/** Growing arrays of pieces; see Trace for their meaning. `step` is the nominal interval of the source in seconds. */
export interface Pieces {
  t0: Float64Array;
  t1: Float64Array;
  v0: Float64Array;
  v1: Float64Array;
  flags: Uint8Array;
  step: Float64Array;
  length: number;
}

export function newPieces(capacity = 64): Pieces {
  return {
    t0: new Float64Array(capacity),
    t1: new Float64Array(capacity),
    v0: new Float64Array(capacity),
    v1: new Float64Array(capacity),
    flags: new Uint8Array(capacity),
    step: new Float64Array(capacity),
    length: 0,
  };
}

export function pushPiece(
  p: Pieces,
  t0: number,
  t1: number,
  v0: number,
  v1: number,
  flags: number,
  step: number,
): void {
  const at = p.length;
  if (at === p.t0.length) grow(p);
  p.t0[at] = t0;
  p.t1[at] = t1;
  p.v0[at] = v0;
  p.v1[at] = v1;
  p.flags[at] = flags;
  p.step[at] = step;
  p.length = at + 1;
}

function grow(p: Pieces): void {
  const wider = (from: Float64Array) => {
    const to = new Float64Array(from.length * 2);
    to.set(from);
    return to;
  };
  p.t0 = wider(p.t0);
  p.t1 = wider(p.t1);
  p.v0 = wider(p.v0);
  p.v1 = wider(p.v1);
  p.step = wider(p.step);
  const flags = new Uint8Array(p.flags.length * 2);
  flags.set(p.flags);
  p.flags = flags;
}

export const MINUTE_MS = 60_000;
export const HOUR_MS = 3_600_000;
const SPREAD_MS = 6 * HOUR_MS;
const LONGEST_SPREAD_MS = 31 * 24 * HOUR_MS;

/** The longest step that is bridged: three nominal intervals, at least five minutes. */
export function longestBridge(intervalSeconds: number): number {
  return Math.max(3 * intervalSeconds * 1000, 5 * MINUTE_MS);
}

export interface SampleMeaning {
  kind: Kind;
  stamp: 'start' | 'end' | 'instant';
  hold: 'toNext' | null;
  intervalSeconds: number;
  /** A register that may fall (`grid`): both directions are energy. */
  mayFall: boolean;
  /** One digit of the display in the register's unit as given, and its counts per that unit (for rollovers). */
  digit: number;
  /** Longest time a value logged on change holds, in ms. */
  longestHold: number;
}

export interface SampleNotes {
  resets: number[];
  rollovers: number[];
  /** Energy of register steps over 31 days: adds to the total of the whole only. */
  beyond: number;
}

/**
 * Turns the samples of one column into pieces.
 *
 * @param t instants in ms, ascending strictly
 * @param v values: W (power), kWh or m³ (energy, register), °C (level), 0/1 (state)
 * @returns pieces in W, m³/h, °C or 0/1
 */
export function piecesOf(
  t: Float64Array,
  v: Float64Array,
  n: number,
  m: SampleMeaning,
  scale: number,
  notes: SampleNotes,
): Pieces {
  const out = newPieces(Math.max(n, 16));
  const nominal = m.intervalSeconds * 1000;
  const bridge = longestBridge(m.intervalSeconds);
  const step = m.intervalSeconds;
  if (m.hold === 'toNext' && m.kind !== 'register' && m.kind !== 'energy') {
    for (let i = 0; i < n; i++) {
      const end = i + 1 < n ? Math.min(t[i + 1], t[i] + m.longestHold) : t[i];
      if (end > t[i]) pushPiece(out, t[i], end, v[i], v[i], 0, step);
    }
    return out;
  }
  switch (m.kind) {
    case 'level':
      for (let i = 0; i + 1 < n; i++)
        if (t[i + 1] - t[i] <= bridge) pushPiece(out, t[i], t[i + 1], v[i], v[i + 1], 0, step);
      break;
    case 'state':
      for (let i = 0; i < n; i++) {
        const next = i + 1 < n ? t[i + 1] : Infinity;
        const end = next - t[i] <= bridge ? next : t[i] + nominal;
        if (end > t[i]) pushPiece(out, t[i], end, v[i], v[i], 0, step);
      }
      break;
    case 'power':
      if (m.stamp === 'instant') {
        for (let i = 0; i + 1 < n; i++)
          if (t[i + 1] - t[i] <= bridge) pushPiece(out, t[i], t[i + 1], v[i], v[i + 1], 0, step);
      } else if (m.stamp === 'start') {
        for (let i = 0; i < n; i++) {
          const next = i + 1 < n ? t[i + 1] : Infinity;
          pushPiece(out, t[i], next - t[i] <= bridge ? next : t[i] + nominal, v[i], v[i], 0, step);
        }
      } else {
        for (let i = 0; i < n; i++) {
          const last = i > 0 ? t[i - 1] : -Infinity;
          pushPiece(out, t[i] - last <= bridge ? last : t[i] - nominal, t[i], v[i], v[i], 0, step);
        }
      }
      break;
    case 'energy':
      for (let i = 0; i < n; i++) {
        let from: number;
        let to: number;
        if (m.stamp === 'start') {
          from = t[i];
          to = i + 1 < n ? Math.min(t[i + 1], from + nominal) : from + nominal;
        } else {
          to = t[i];
          from = i > 0 ? Math.max(t[i - 1], to - nominal) : to - nominal;
        }
        const rate = (v[i] * scale) / ((to - from) / HOUR_MS);
        pushPiece(out, from, to, rate, rate, 0, step);
      }
      break;
    case 'register':
      for (let i = 0; i + 1 < n; i++) {
        const dt = t[i + 1] - t[i];
        let dv = v[i + 1] - v[i];
        if (dv < 0 && !m.mayFall) {
          if (-dv <= m.digit * 1.000001) dv = 0;
          else {
            const wrap = rollover(v[i], v[i + 1], m.digit);
            if (wrap === null) {
              notes.resets.push(t[i + 1]);
              continue;
            }
            notes.rollovers.push(t[i + 1]);
            dv += wrap;
          }
        }
        if (dt > LONGEST_SPREAD_MS) {
          notes.beyond += dv * scale;
          continue;
        }
        const rate = (dv * scale) / (dt / HOUR_MS);
        pushPiece(out, t[i], t[i + 1], rate, rate, dt > SPREAD_MS ? PIECE.spread : 0, step);
      }
      break;
  }
  return out;
}

/** The size of the wrap when a fall is a rollover, else null. Counts are in units of one display digit. */
function rollover(before: number, after: number, digit: number): number | null {
  const sizes: number[] = [];
  for (let p = 1; p <= 15; p++) sizes.push(10 ** p * digit);
  sizes.push(2 ** 16 * digit, 2 ** 32 * digit);
  for (const size of sizes)
    if (before < size && before >= 0.99 * size && after >= 0 && after < 0.01 * size) return size;
  return null;
}
