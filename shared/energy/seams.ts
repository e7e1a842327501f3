import { PIECE } from './layer.ts';
import {
  HOUR_MS,
  longestBridge,
  longestHold,
  newPieces,
  type Pieces,
  pushPiece,
  appendPieces,
  SPREAD_MS,
} from './pieces.ts';
import { registerStep } from './register.ts';
import type { Samples } from './samples.ts';
import { atOrBefore, sideOf, type Source } from './spans.ts';

const LONGEST_SPREAD_MS = 31 * 24 * HOUR_MS;
/** No household's meter counts faster; a greater step is from one meter to another. */
const FASTEST_W = 60_000;
const FASTEST_M3_PER_HOUR = 10;

export interface SeamNotes {
  /** Register steps of more than 31 days, by the instant of their end, kWh or m³. */
  beyond: { at: number; amount: number }[];
  /** Instants at which one log's register stood below another's. */
  resets: number[];
}

/**
 * Closes gaps with what two neighbouring readings of one channel say, be they of one log or of two: register
 * differences however long, and, within the longest bridge, what the kind of value allows. Where logs meet, the day is
 * what it would have been had they come as one.
 *
 * @param pieces what the logs said, with gaps
 */
export function closeGaps(pieces: Pieces, sources: readonly Source[], notes: SeamNotes): Pieces {
  const registers = sources.some(({ samples }) => samples.kind === 'register');
  if (sources.length < 2 && !registers) return pieces;
  let out: Pieces | null = null;
  let first = 0;
  for (let i = 0; i <= pieces.length; i++) {
    const from = i > 0 ? pieces.t1[i - 1] : -Infinity;
    const to = i < pieces.length ? pieces.t0[i] : Infinity;
    if (to <= from) continue;
    const found = within(from, to, sources, notes);
    if (!found.length) continue;
    out ??= newPieces(pieces.length + 64);
    appendPieces(out, pieces, first, i - 1);
    first = i;
    for (const p of found) pushPiece(out, p.from, p.to, p.v0, p.v1, p.flags);
  }
  if (!out) return pieces;
  appendPieces(out, pieces, first, pieces.length - 1);
  return out;
}

interface Found {
  from: number;
  to: number;
  v0: number;
  v1: number;
  flags: number;
}

interface Reading {
  t: number;
  v: number;
  source: Source;
}

function within(from: number, to: number, sources: readonly Source[], notes: SeamNotes): Found[] {
  const readings: Reading[] = [];
  for (const source of sources) {
    const { samples } = source;
    if (samples.kind === 'energy') continue;
    for (let i = Math.max(0, atOrBefore(samples, from)); i < samples.n; i++) {
      readings.push({ t: samples.t[i], v: samples.v[i], source });
      if (samples.t[i] >= to) break;
    }
  }
  readings.sort((a, b) => a.t - b.t || a.source.order - b.source.order);
  const found: Found[] = [];
  for (let i = 0; i + 1 < readings.length; i++) {
    const a = readings[i];
    const b = readings[i + 1];
    if (a.t === b.t || b.t <= from || a.t >= to) continue;
    const piece = joined(a, b, notes);
    if (!piece) continue;
    const start = Math.max(from, piece.from);
    const end = Math.min(to, piece.to);
    if (end <= start) continue;
    const slope = (piece.v1 - piece.v0) / (piece.to - piece.from);
    found.push({
      from: start,
      to: end,
      v0: start === piece.from ? piece.v0 : piece.v0 + slope * (start - piece.from),
      v1: end === piece.to ? piece.v1 : piece.v1 + slope * (end - piece.to),
      flags: piece.flags,
    });
  }
  return found;
}

/** What lies between two neighbouring readings, `null` where they leave it open. */
function joined(a: Reading, b: Reading, notes: SeamNotes): Found | null {
  const p = a.source.samples;
  const q = b.source.samples;
  const { sign } = a.source;
  if (sign !== b.source.sign) return null;
  if (p.kind !== q.kind || p.stamp !== q.stamp || p.hold !== q.hold || p.volumetric !== q.volumetric) return null;
  if (p.kind === 'register') return counted(a, b, notes);
  if (p === q) return null;
  const piece = (v0: number, v1: number, to = b.t): Found => ({
    from: a.t,
    to,
    v0: sideOf(v0, sign),
    v1: sideOf(v1, sign),
    flags: 0,
  });
  if (p.hold === 'toNext') return piece(a.v, a.v, Math.min(b.t, a.t + longestHold(p)));
  if (b.t - a.t > bridgeOf(p, q)) return null;
  if (p.kind === 'level' || (p.kind === 'power' && p.stamp === 'instant')) return piece(a.v, b.v);
  return p.kind === 'power' && p.stamp === 'end' ? piece(b.v, b.v) : piece(a.v, a.v);
}

function bridgeOf(p: Samples, q: Samples): number {
  return longestBridge(Math.min(p.intervalSeconds, q.intervalSeconds));
}

function counted(a: Reading, b: Reading, notes: SeamNotes): Found | null {
  const { samples, mayFall, sign } = a.source;
  const same = samples === b.source.samples;
  const dt = b.t - a.t;
  let step: number;
  if (same) {
    const at = atOrBefore(samples, a.t);
    step = stepBetween(samples, at, mayFall);
  } else step = mayFall ? b.v - a.v : registerStep(a.v, b.v, samples.digit);
  if (step !== step) {
    if (!same) notes.resets.push(b.t);
    return null;
  }
  const rate = (step * samples.scale * HOUR_MS) / dt;
  if (!same && Math.abs(rate) > (samples.volumetric ? FASTEST_M3_PER_HOUR : FASTEST_W)) {
    notes.resets.push(b.t);
    return null;
  }
  if (dt > LONGEST_SPREAD_MS) {
    notes.beyond.push({ at: b.t, amount: sideOf(step, sign) });
    return null;
  }
  const side = sideOf(rate, sign);
  return { from: a.t, to: b.t, v0: side, v1: side, flags: dt > SPREAD_MS ? PIECE.spread : 0 };
}

/** A log's own step from reading `i` on, its counters taken one by one. */
function stepBetween({ parts, v, digit }: Samples, i: number, mayFall: boolean): number {
  let sum = 0;
  for (const counter of parts.length ? parts : [v])
    sum += mayFall ? counter[i + 1] - counter[i] : registerStep(counter[i], counter[i + 1], digit);
  return sum;
}
