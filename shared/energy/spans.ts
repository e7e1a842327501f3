import { PIECE } from './layer.ts';
import { appendPieces, EDGE, newPieces, type Pieces, pushPiece, valueIn } from './pieces.ts';
import type { Samples } from './samples.ts';

/** One log's pieces of a channel, with what decides whether it speaks. */
export interface Source {
  /** Later speaks before earlier. */
  order: number;
  intervalSeconds: number;
  samples: Samples;
  pieces: Pieces;
  /** Which side of a signed channel this is, 0 for the readings as they are. */
  sign: -1 | 0 | 1;
  /** A register that counts both ways. */
  mayFall: boolean;
}

/** One side of a signed value: what is on the other counts as zero. */
export function sideOf(value: number, sign: Source['sign']): number {
  return sign === 0 ? value : Math.max(value * sign, 0);
}

/** A stretch of unbroken pieces of one rank. */
interface Span {
  from: number;
  to: number;
  rank: number;
  first: number;
}

/** A stretch in which one source speaks. */
export interface Segment {
  source: Source;
  from: number;
  to: number;
}

/** What neighbours bound comes first, then what rests on a nominal interval, then what is only assumed. */
function rankOf(flags: number): number {
  return flags & PIECE.assumed ? 2 : flags & EDGE ? 1 : 0;
}

function spansOf({ t0, t1, flags, length }: Pieces): Span[] {
  const spans: Span[] = [];
  let span: Span | null = null;
  for (let i = 0; i < length; i++) {
    const rank = rankOf(flags[i]);
    if (span && span.to === t0[i] && span.rank === rank) span.to = t1[i];
    else spans.push((span = { from: t0[i], to: t1[i], rank, first: i }));
  }
  return spans;
}

/**
 * The rule of spans: of the sources that cover a time, those whose interval is at most twice the finest's may speak, and
 * of these the one accepted last does. The result depends on the sources alone, not on the order in which they are given.
 *
 * @param aside told of each overlap in which another source of the same rank was set aside
 */
export function speakers(
  sources: readonly Source[],
  aside: (from: number, to: number, speaks: Source, silent: Source) => void,
): Segment[] {
  const spans = sources.map((source) => spansOf(source.pieces));
  const bounds = new Float64Array(spans.reduce((sum, list) => sum + 2 * list.length, 0));
  let at = 0;
  for (const list of spans)
    for (const { from, to } of list) {
      bounds[at++] = from;
      bounds[at++] = to;
    }
  bounds.sort();
  const place = new Int32Array(sources.length);
  const segments: Segment[] = [];
  for (let b = 0; b + 1 < bounds.length; b++) {
    const from = bounds[b];
    const to = bounds[b + 1];
    if (from === to) continue;
    let rank = Infinity;
    let finest = Infinity;
    for (let k = 0; k < sources.length; k++) {
      const span = covering(spans[k], place, k, from);
      if (!span || span.rank > rank) continue;
      const { intervalSeconds } = sources[k];
      finest = span.rank < rank ? intervalSeconds : Math.min(finest, intervalSeconds);
      rank = span.rank;
    }
    if (rank === Infinity) continue;
    let winner = -1;
    for (let k = 0; k < sources.length; k++) {
      const span = spans[k][place[k]];
      if (!span || span.from > from || span.rank !== rank || sources[k].intervalSeconds > 2 * finest) continue;
      if (winner < 0 || sources[k].order > sources[winner].order) winner = k;
    }
    for (let k = 0; k < sources.length; k++) {
      const span = spans[k][place[k]];
      if (k !== winner && span && span.from <= from && span.rank === rank) aside(from, to, sources[winner], sources[k]);
    }
    const last = segments[segments.length - 1];
    if (last && last.source === sources[winner] && last.to === from) last.to = to;
    else segments.push({ source: sources[winner], from, to });
  }
  return segments;
}

/** The span of source `k` that covers an instant; its place only moves on. */
function covering(spans: readonly Span[], place: Int32Array, k: number, at: number): Span | null {
  while (place[k] < spans.length && spans[place[k]].to <= at) place[k]++;
  const span = spans[place[k]];
  return span && span.from <= at ? span : null;
}

/** Index of the first piece that ends after an instant. */
export function firstAfter({ t1, length }: Pieces, at: number): number {
  let low = 0;
  let high = length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (t1[middle] <= at) low = middle + 1;
    else high = middle;
  }
  return low;
}

/**
 * Ends what rests on a nominal interval where another log of the same sort has a reading: there is its neighbour. Of an
 * amount only where the other log has this very reading too, for its interval must stay its own.
 */
export function trimEdges(sources: readonly Source[]): void {
  for (const source of sources) {
    const { pieces, samples } = source;
    const { kind, stamp } = samples;
    if (kind === 'level' || kind === 'register' || samples.hold) continue;
    const backward = stamp === 'end' && kind !== 'state';
    let copied = false;
    for (let i = 0; i < pieces.length; i++) {
      if (!(pieces.flags[i] & EDGE)) continue;
      const own = backward ? pieces.t1[i] : pieces.t0[i];
      const far = backward ? pieces.t0[i] : pieces.t1[i];
      const near = nearestOther(sources, source, own, far);
      if (near === far) continue;
      if (!copied) {
        // These arrays may be shared with other channels.
        pieces.t0 = pieces.t0.slice();
        pieces.t1 = pieces.t1.slice();
        copied = true;
      }
      if (backward) pieces.t0[i] = near;
      else pieces.t1[i] = near;
      if (kind === 'energy') pieces.v0[i] = pieces.v1[i] = (pieces.v0[i] * (far - own)) / (near - own);
    }
  }
}

function nearestOther(sources: readonly Source[], source: Source, own: number, far: number): number {
  const { kind, stamp, hold } = source.samples;
  let near = far;
  for (const other of sources) {
    const { samples } = other;
    if (other === source || samples.kind !== kind || samples.stamp !== stamp || samples.hold !== hold) continue;
    const at = atOrBefore(samples, own);
    if (kind === 'energy' && !sameReading(source.samples, samples, own)) continue;
    const index = far > own ? at + 1 : samples.t[at] === own ? at - 1 : at;
    const t = index >= 0 && index < samples.n ? samples.t[index] : far;
    if (Math.abs(t - own) < Math.abs(near - own)) near = t;
  }
  return near;
}

function sameReading(a: Samples, b: Samples, instant: number): boolean {
  const i = atOrBefore(a, instant);
  const k = atOrBefore(b, instant);
  return i >= 0 && k >= 0 && a.t[i] === instant && b.t[k] === instant && a.v[i] === b.v[k];
}

/** What the speakers say, cut where they take turns. */
export function spoken(segments: readonly Segment[]): Pieces {
  const out = newPieces(segments.reduce((sum, { source }) => Math.max(sum, source.pieces.length), 64));
  segments.forEach(({ source, from, to }, s) => {
    const { pieces } = source;
    let first = firstAfter(pieces, from);
    if (first < pieces.length && pieces.t0[first] < from) {
      part(out, segments, s, first, from, Math.min(to, pieces.t1[first]));
      first++;
    }
    // The first piece that ends after the segment: those before it are whole.
    const last = firstAfter(pieces, to);
    if (last < first) return;
    appendPieces(out, pieces, first, last - 1);
    if (last < pieces.length && pieces.t0[last] < to) part(out, segments, s, last, pieces.t0[last], to);
  });
  return out;
}

/** A part of a piece; of an amount that a neighbouring segment has already taken whole there is none. */
function part(out: Pieces, segments: readonly Segment[], s: number, i: number, from: number, to: number): void {
  const { source } = segments[s];
  const { pieces, samples } = source;
  if (samples.kind === 'energy') {
    const stamp = samples.stamp === 'start' ? pieces.t0[i] : pieces.t1[i];
    for (const near of [segments[s - 1], segments[s + 1]])
      if (near && near.source !== source && near.source.samples.kind === 'energy' && has(near, stamp)) return;
  }
  if (to > from) pushPiece(out, from, to, valueIn(pieces, i, from), valueIn(pieces, i, to), pieces.flags[i]);
}

function has({ source: { samples }, from, to }: Segment, instant: number): boolean {
  if (instant < from || instant > to) return false;
  const at = atOrBefore(samples, instant);
  return at >= 0 && samples.t[at] === instant;
}

/** Index of the last reading at or before an instant, −1 if there is none. */
export function atOrBefore({ t, n }: Samples, instant: number): number {
  let low = 0;
  let high = n;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (t[middle] <= instant) low = middle + 1;
    else high = middle;
  }
  return low - 1;
}
