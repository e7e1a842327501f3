import { PIECE } from './layer.ts';
import { registerSteps } from './register.ts';
import type { Samples } from './samples.ts';

/** Stretches of time that do not overlap, ascending; see Trace. Arrays may be longer than `length`, and shared. */
export interface Pieces {
  t0: Float64Array;
  t1: Float64Array;
  v0: Float64Array;
  v1: Float64Array;
  flags: Uint8Array;
  length: number;
}

export const MINUTE_MS = 60_000;
export const HOUR_MS = 3_600_000;

/** Within a log's own pieces: the far end rests on the nominal interval, not on a neighbour. Not in a Trace. */
export const EDGE = 4;

export function newPieces(capacity: number): Pieces {
  return {
    t0: new Float64Array(capacity),
    t1: new Float64Array(capacity),
    v0: new Float64Array(capacity),
    v1: new Float64Array(capacity),
    flags: new Uint8Array(capacity),
    length: 0,
  };
}

export function pushPiece(p: Pieces, t0: number, t1: number, v0: number, v1: number, flags: number): void {
  const at = p.length;
  if (at === p.t0.length) grow(p);
  p.t0[at] = t0;
  p.t1[at] = t1;
  p.v0[at] = v0;
  p.v1[at] = v1;
  p.flags[at] = flags;
  p.length = at + 1;
}

/** Adds pieces `first` to `last` (included) of another list as they are. */
export function appendPieces(p: Pieces, from: Pieces, first: number, last: number): void {
  const n = last - first + 1;
  if (n <= 0) return;
  while (p.length + n > p.t0.length) grow(p);
  p.t0.set(from.t0.subarray(first, last + 1), p.length);
  p.t1.set(from.t1.subarray(first, last + 1), p.length);
  p.v0.set(from.v0.subarray(first, last + 1), p.length);
  p.v1.set(from.v1.subarray(first, last + 1), p.length);
  p.flags.set(from.flags.subarray(first, last + 1), p.length);
  p.length += n;
}

function grow(p: Pieces): void {
  const size = Math.max(64, p.t0.length * 2);
  const wider = (from: Float64Array) => {
    const to = new Float64Array(size);
    to.set(from);
    return to;
  };
  p.t0 = wider(p.t0);
  p.t1 = wider(p.t1);
  p.v0 = wider(p.v0);
  p.v1 = wider(p.v1);
  const flags = new Uint8Array(size);
  flags.set(p.flags);
  p.flags = flags;
}

/** The longest step that is bridged, ms: three nominal intervals, at least five minutes. */
export function longestBridge(intervalSeconds: number): number {
  return Math.max(3 * intervalSeconds * 1000, 5 * MINUTE_MS);
}

/** The longest that a value logged on change holds, ms: a day, six hours for a temperature. */
export function longestHold({ kind }: Pick<Samples, 'kind'>): number {
  return (kind === 'level' ? 6 : 24) * HOUR_MS;
}

/** The value of piece `i` at an instant within it. */
export function valueIn({ t0, t1, v0, v1 }: Pieces, i: number, at: number): number {
  if (v0[i] === v1[i] || at === t0[i]) return v0[i];
  if (at === t1[i]) return v1[i];
  return v0[i] + ((v1[i] - v0[i]) * (at - t0[i])) / (t1[i] - t0[i]);
}

export interface RegisterNotes {
  resets: number[];
  rollovers: number[];
}

/**
 * One log's readings of a channel as pieces in W, m³/h, °C or 0/1. Register steps over six hours are no pieces here:
 * they are taken once all logs are known (see `seams.ts`).
 *
 * @param mayFall a register that counts both ways (`grid`, `battery`)
 */
export function piecesOf(s: Samples, mayFall: boolean, notes: RegisterNotes): Pieces {
  const pieces = built(s, mayFall, notes);
  return s.sleeps === 'dark' ? withDark(pieces) : pieces;
}

function built(s: Samples, mayFall: boolean, notes: RegisterNotes): Pieces {
  if (s.hold === 'toNext' && s.kind !== 'register' && s.kind !== 'energy') return held(s);
  switch (s.kind) {
    case 'level':
      return between(s);
    case 'state':
      return forward(s);
    case 'power':
      if (s.stamp === 'instant') return between(s);
      return s.stamp === 'start' ? forward(s) : backward(s);
    case 'energy':
      return amounts(s);
    case 'register':
      return registerPieces(s, mayFall, notes);
  }
}

/** A value holds to the next row; the last row has no next one. */
function held(s: Samples): Pieces {
  const { t, v, n } = s;
  const longest = longestHold(s);
  const out = newPieces(Math.max(0, n - 1));
  for (let i = 0; i + 1 < n; i++) pushPiece(out, t[i], Math.min(t[i + 1], t[i] + longest), v[i], v[i], 0);
  return out;
}

/** Straight from one reading to the next. */
function between({ time, t, v, n, intervalSeconds }: Samples): Pieces {
  const bridge = longestBridge(intervalSeconds);
  const last = Math.max(0, n - 1);
  if (time.longest <= bridge)
    return {
      t0: t.subarray(0, last),
      t1: t.subarray(1),
      v0: v.subarray(0, last),
      v1: v.subarray(1, last + 1),
      flags: new Uint8Array(last),
      length: last,
    };
  const out = newPieces(last);
  for (let i = 0; i < last; i++) if (t[i + 1] - t[i] <= bridge) pushPiece(out, t[i], t[i + 1], v[i], v[i + 1], 0);
  return out;
}

/** A mean from its stamp on: to the next row, or one nominal interval before a gap and at the end. */
function forward({ time, t, v, n, intervalSeconds }: Samples): Pieces {
  const bridge = longestBridge(intervalSeconds);
  const nominal = intervalSeconds * 1000;
  if (n === 0) return newPieces(0);
  const { slots } = time;
  if (time.longest <= bridge && nominal > 0 && claim(slots, n + 1, slots[n] + nominal)) {
    const flags = new Uint8Array(n);
    flags[n - 1] = EDGE;
    return { t0: t, t1: slots.subarray(2, n + 2), v0: v, v1: v, flags, length: n };
  }
  const out = newPieces(n);
  for (let i = 0; i < n; i++) {
    if (i + 1 < n && t[i + 1] - t[i] <= bridge) pushPiece(out, t[i], t[i + 1], v[i], v[i], 0);
    else if (nominal > 0) pushPiece(out, t[i], t[i] + nominal, v[i], v[i], EDGE);
  }
  return out;
}

/** A mean up to its stamp: from the row before, or one nominal interval after a gap and at the beginning. */
function backward({ time, t, v, n, intervalSeconds }: Samples): Pieces {
  const bridge = longestBridge(intervalSeconds);
  const nominal = intervalSeconds * 1000;
  if (n === 0) return newPieces(0);
  const { slots } = time;
  if (time.longest <= bridge && nominal > 0 && claim(slots, 0, slots[1] - nominal)) {
    const flags = new Uint8Array(n);
    flags[0] = EDGE;
    return { t0: slots.subarray(0, n), t1: t, v0: v, v1: v, flags, length: n };
  }
  const out = newPieces(n);
  for (let i = 0; i < n; i++) {
    if (i > 0 && t[i] - t[i - 1] <= bridge) pushPiece(out, t[i - 1], t[i], v[i], v[i], 0);
    else if (nominal > 0) pushPiece(out, t[i] - nominal, t[i], v[i], v[i], EDGE);
  }
  return out;
}

/** Writes into a free slot of a timeline that channels share, unless another channel needs another value there. */
function claim(slots: Float64Array, at: number, value: number): boolean {
  if (slots[at] !== 0 && slots[at] !== value) return false;
  slots[at] = value;
  return true;
}

/** An amount as the mean power of its interval: one nominal interval, unless the neighbour is nearer. */
function amounts({ t, v, n, stamp, intervalSeconds, scale }: Samples): Pieces {
  const bridge = longestBridge(intervalSeconds);
  const out = newPieces(n);
  for (let i = 0; i < n; i++) {
    const neighbour = stamp === 'start' ? i + 1 : i - 1;
    const step = neighbour >= 0 && neighbour < n ? Math.abs(t[neighbour] - t[i]) : Infinity;
    const nominal = intervalSeconds > 0 ? intervalSeconds * 1000 : step;
    const long = Math.min(step, nominal);
    if (long === Infinity) continue;
    const rate = (v[i] * scale) / (long / HOUR_MS);
    const from = stamp === 'start' ? t[i] : t[i] - long;
    pushPiece(out, from, from + long, rate, rate, step > bridge ? EDGE : 0);
  }
  return out;
}

function registerPieces(s: Samples, mayFall: boolean, notes: RegisterNotes): Pieces {
  const { time, t, n } = s;
  const steps = registerSteps(s, mayFall, notes);
  const last = Math.max(0, n - 1);
  const perHour = s.scale * HOUR_MS;
  if (time.longest <= SPREAD_MS && notes.resets.length === 0) {
    for (let i = 0; i < last; i++) steps[i] = (steps[i] * perHour) / (t[i + 1] - t[i]);
    return {
      t0: t.subarray(0, last),
      t1: t.subarray(1),
      v0: steps,
      v1: steps,
      flags: new Uint8Array(last),
      length: last,
    };
  }
  const out = newPieces(last);
  for (let i = 0; i < last; i++) {
    const dt = t[i + 1] - t[i];
    const rate = (steps[i] * perHour) / dt;
    if (rate !== rate) continue;
    if (dt <= SPREAD_MS) pushPiece(out, t[i], t[i + 1], rate, rate, 0);
    else if (s.sleeps === 'dark' && dt <= LONGEST_DARK_MS && Math.abs(rate) < NEXT_TO_NOTHING_W)
      pushPiece(out, t[i], t[i + 1], rate, rate, PIECE.assumed);
  }
  return out;
}

/** A register step longer than this adds to totals only. */
export const SPREAD_MS = 6 * HOUR_MS;

/** What a sleeping logger leaves out: at least so much longer than a gap in its rows, at most a midwinter night. */
const SHORTEST_DARK_MS = 2 * HOUR_MS;
const LONGEST_DARK_MS = 20 * HOUR_MS;
const NEXT_TO_NOTHING_W = 20;
/** Before and after the dark a generator gives next to nothing: this share of its best within a day of it. */
const NEXT_TO_NOTHING_SHARE = 0.05;

/** Fills the nights of a logger that sleeps in the dark with zero, where its neighbours are near zero. */
function withDark(p: Pieces): Pieces {
  const out = newPieces(p.length + 64);
  let first = 0;
  for (let i = 0; i + 1 < p.length; i++) {
    const gap = p.t0[i + 1] - p.t1[i];
    if (gap < SHORTEST_DARK_MS || gap > LONGEST_DARK_MS) continue;
    const nothing = Math.max(NEXT_TO_NOTHING_W, NEXT_TO_NOTHING_SHARE * bestAround(p, i));
    if (p.v1[i] > nothing || p.v0[i + 1] > nothing) continue;
    appendPieces(out, p, first, i);
    pushPiece(out, p.t1[i], p.t0[i + 1], 0, 0, PIECE.assumed);
    first = i + 1;
  }
  appendPieces(out, p, first, p.length - 1);
  return out;
}

function bestAround(p: Pieces, gap: number): number {
  const DAY = 24 * HOUR_MS;
  let best = 0;
  for (let i = gap; i >= 0 && p.t1[gap] - p.t0[i] <= DAY; i--) if (p.v0[i] > best) best = p.v0[i];
  for (let i = gap + 1; i < p.length && p.t1[i] - p.t0[gap + 1] <= DAY; i++) if (p.v0[i] > best) best = p.v0[i];
  return best;
}
