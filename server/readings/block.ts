import { createHash } from 'node:crypto';
import type { ColumnMeaning, Layer, LayerColumn } from '../../shared/energy/layer.ts';
import type { Channel, Kind, Unit } from '../../shared/units/channels.ts';

/**
 * A block is one layer (all columns of one log on one UTC day) as bytes. Its layout, little-endian:
 *
 *     version  u8
 *     columns  u8 low, u8 high
 *     rows     u32
 *     header per column (HEADER bytes): channel, kind, unit, bits, scale (u8 each), factor f64, interval f64,
 *              length of the column's data u32
 *     instants form u8, then REGULAR: first f64, step f64; STEPS: first f64, then zig-zag varints of the changes of the
 *              step; PLAIN: f64 each
 *     data per column: if some are missing a bitmap of the rows that are there, then zig-zag varints of the
 *              differences of the scaled integers, or f64 each
 *
 * All that gives the numbers meaning is in it, so that two blocks of one hash say the same. The day is not: it is
 * part of the key under which the block is stored.
 */
const VERSION = 1;
const HEADER = 25;
const PREAMBLE = 7;
const INTERVAL_AT = 13;

/** The codes are permanent: they stand in stored blocks. */
const CHANNEL_CODE: Record<Channel, number> = {
  grid: 1,
  export: 2,
  import: 3,
  generation: 4,
  diversion: 5,
  diversion2: 6,
  tankTop: 7,
  tankMiddle: 8,
  tankBottom: 9,
  relay: 10,
  gas: 11,
  coldFeed: 12,
  ambient: 13,
  battery: 14,
  charger: 15,
};
const KIND_CODE: Record<Kind, number> = { power: 1, energy: 2, register: 3, level: 4, state: 5 };
const UNIT_CODE: Record<Unit, number> = {
  W: 1,
  kW: 2,
  Wh: 3,
  kWh: 4,
  MWh: 5,
  MJ: 6,
  m3: 7,
  litre: 8,
  ft3: 9,
  ft3x100: 10,
  C: 11,
  F: 12,
  state: 13,
};
const STAMP_CODE: Record<ColumnMeaning['stamp'], number> = { start: 0, end: 1, instant: 2 };

const CHANNEL_OF = named(CHANNEL_CODE);
const KIND_OF = named(KIND_CODE);
const UNIT_OF = named(UNIT_CODE);
const STAMP_OF = named(STAMP_CODE);

const BIT = { negative: 1, toNext: 2, dark: 4, plain: 8, sparse: 16, stamp: 32 } as const;
const NO_SCALE = 255;
const REGULAR = 0;
const STEPS = 1;
const PLAIN = 2;
/** Differences up to here and their zig-zag form are exact in a double. */
const MAX_DIFFERENCE = 2 ** 51;

/** Bytes that grow; one for all encoding, which never waits half way. */
let scratch = new Uint8Array(1 << 16);
let view = new DataView(scratch.buffer);

function reserve(size: number): void {
  if (size <= scratch.length) return;
  const larger = new Uint8Array(Math.max(size, scratch.length * 2));
  larger.set(scratch);
  scratch = larger;
  view = new DataView(scratch.buffer);
}

/**
 * Encodes a layer. Negative zeros become zeros; everything else comes back as it was.
 * @returns bytes of its own; `intervalSeconds` may still be patched, the hash is taken after that
 */
export function encodeLayer({ instants, columns }: Layer): Uint8Array {
  const rows = instants.length;
  let at = PREAMBLE + columns.length * HEADER;
  reserve(at + 17 + rows * 8);
  at = encodeInstants(instants, at);
  for (let c = 0; c < columns.length; c++) {
    const column = columns[c];
    reserve(at + (rows >> 3) + 1 + rows * 8);
    const start = at;
    const present = presenceOf(column.values);
    let bits = 0;
    if (present < rows) {
      bits |= BIT.sparse;
      at = encodePresence(column.values, at);
    }
    const end = column.scale === null ? -1 : encodeDifferences(column.values, at);
    if (end < 0) {
      bits |= BIT.plain;
      for (let i = 0; i < rows; i++) {
        const value = column.values[i];
        if (value !== value) continue;
        view.setFloat64(at, value === 0 ? 0 : value, true);
        at += 8;
      }
    } else at = end;
    encodeMeaning(column, bits, at - start, PREAMBLE + c * HEADER);
  }
  scratch[0] = VERSION;
  view.setUint16(1, columns.length, true);
  view.setUint32(3, rows, true);
  return scratch.slice(0, at);
}

/**
 * Writes the nominal intervals, known only when the whole log was read, into a block.
 * @param intervals seconds, in the order of the columns
 */
export function patchIntervals(block: Uint8Array, intervals: readonly number[]): void {
  const bytes = new DataView(block.buffer, block.byteOffset, block.length);
  const columns = bytes.getUint16(1, true);
  if (columns !== intervals.length) throw new RangeError(`${intervals.length} intervals for ${columns} columns.`);
  for (let c = 0; c < columns; c++) bytes.setFloat64(PREAMBLE + c * HEADER + INTERVAL_AT, intervals[c], true);
}

/** What a block is stored under within its property and day: the first 16 bytes of its SHA-256. */
export function hashOf(block: Uint8Array): Buffer {
  return createHash('sha256').update(block).digest().subarray(0, 16);
}

/**
 * Decodes a block.
 * @param utcDay the day under which it is stored
 * @param only leaves all other channels out, without decoding them
 * @throws RangeError if it is of a version that this program does not know, or damaged
 */
export function decodeLayer(block: Uint8Array, utcDay: number, only?: ReadonlySet<Channel>): Layer {
  if (block[0] !== VERSION) throw new RangeError(`A block of version ${block[0]} cannot be read.`);
  const bytes = new DataView(block.buffer, block.byteOffset, block.length);
  const count = bytes.getUint16(1, true);
  const rows = bytes.getUint32(3, true);
  const instants = new Float64Array(rows);
  let at = decodeInstants(block, bytes, PREAMBLE + count * HEADER, instants);
  const columns: LayerColumn[] = [];
  for (let c = 0; c < count; c++) {
    const header = PREAMBLE + c * HEADER;
    const length = bytes.getUint32(header + 21, true);
    const meaning = decodeMeaning(bytes, header);
    if (!only || only.has(meaning.channel)) {
      const scale = bytes.getUint8(header + 4);
      columns.push({
        ...meaning,
        scale: scale === NO_SCALE ? null : scale,
        values: decodeValues(block, bytes, at, rows, bytes.getUint8(header + 3)),
      });
    }
    at += length;
  }
  if (at !== block.length) throw new RangeError('A block is damaged: it does not end where it should.');
  return { utcDay, instants, columns };
}

/** The channels that a block holds. */
export function channelsOf(block: Uint8Array): Channel[] {
  const columns = block[1] + block[2] * 256;
  return Array.from({ length: columns }, (_, c) => CHANNEL_OF[block[PREAMBLE + c * HEADER]]);
}

function named<Name extends string>(codes: Record<Name, number>): Name[] {
  const names: Name[] = [];
  for (const [name, code] of Object.entries(codes) as [Name, number][]) names[code] = name;
  return names;
}

function encodeMeaning(column: LayerColumn, bits: number, length: number, at: number): void {
  scratch[at] = CHANNEL_CODE[column.channel];
  scratch[at + 1] = KIND_CODE[column.kind];
  scratch[at + 2] = UNIT_CODE[column.unit];
  scratch[at + 3] =
    bits |
    (column.sign < 0 ? BIT.negative : 0) |
    (column.hold ? BIT.toNext : 0) |
    (column.sleeps ? BIT.dark : 0) |
    (STAMP_CODE[column.stamp] * BIT.stamp);
  scratch[at + 4] = column.scale ?? NO_SCALE;
  view.setFloat64(at + 5, column.factor, true);
  view.setFloat64(at + INTERVAL_AT, column.intervalSeconds, true);
  view.setUint32(at + 21, length, true);
}

function decodeMeaning(bytes: DataView, at: number): ColumnMeaning {
  const bits = bytes.getUint8(at + 3);
  return {
    channel: CHANNEL_OF[bytes.getUint8(at)],
    kind: KIND_OF[bytes.getUint8(at + 1)],
    unit: UNIT_OF[bytes.getUint8(at + 2)],
    sign: bits & BIT.negative ? -1 : 1,
    factor: bytes.getFloat64(at + 5, true),
    stamp: STAMP_OF[Math.floor(bits / BIT.stamp)],
    hold: bits & BIT.toNext ? 'toNext' : null,
    sleeps: bits & BIT.dark ? 'dark' : null,
    intervalSeconds: bytes.getFloat64(at + INTERVAL_AT, true),
  };
}

function encodeInstants(instants: Float64Array, from: number): number {
  const rows = instants.length;
  let at = from + 1;
  const step = rows > 1 ? instants[1] - instants[0] : 0;
  let regular = true;
  let whole = true;
  for (let i = 0; i < rows; i++) {
    if (i > 0 && instants[i] - instants[i - 1] !== step) regular = false;
    if (!Number.isSafeInteger(instants[i])) whole = false;
  }
  if (regular && whole) {
    scratch[from] = REGULAR;
    view.setFloat64(at, rows === 0 ? 0 : instants[0], true);
    view.setFloat64(at + 8, step, true);
    return at + 16;
  }
  if (!whole) {
    scratch[from] = PLAIN;
    for (let i = 0; i < rows; i++, at += 8) view.setFloat64(at, instants[i], true);
    return at;
  }
  scratch[from] = STEPS;
  view.setFloat64(at, instants[0], true);
  at += 8;
  let last = 0;
  for (let i = 1; i < rows; i++) {
    const now = instants[i] - instants[i - 1];
    at = putVarint(now - last, at);
    last = now;
  }
  return at;
}

function decodeInstants(block: Uint8Array, bytes: DataView, from: number, instants: Float64Array): number {
  const rows = instants.length;
  let at = from + 1;
  const form = block[from];
  if (form === REGULAR) {
    const first = bytes.getFloat64(at, true);
    const step = bytes.getFloat64(at + 8, true);
    for (let i = 0; i < rows; i++) instants[i] = first + i * step;
    return at + 16;
  }
  if (form === PLAIN) {
    for (let i = 0; i < rows; i++, at += 8) instants[i] = bytes.getFloat64(at, true);
    return at;
  }
  let now = bytes.getFloat64(at, true);
  at += 8;
  instants[0] = now;
  cursor = at;
  let step = 0;
  for (let i = 1; i < rows; i++) {
    step += takeVarint(block);
    now += step;
    instants[i] = now;
  }
  return cursor;
}

function presenceOf(values: Float64Array): number {
  let present = 0;
  for (let i = 0; i < values.length; i++) if (values[i] === values[i]) present++;
  return present;
}

function encodePresence(values: Float64Array, at: number): number {
  const end = at + ((values.length + 7) >> 3);
  scratch.fill(0, at, end);
  for (let i = 0; i < values.length; i++) if (values[i] === values[i]) scratch[at + (i >> 3)] |= 1 << (i & 7);
  return end;
}

/** The end of what was written, or -1 if the values are not whole numbers whose differences are exact. */
function encodeDifferences(values: Float64Array, from: number): number {
  const bytes = scratch;
  let at = from;
  let last = 0;
  for (let i = 0; i < values.length; i++) {
    const value = values[i];
    if (value !== value) continue;
    const difference = value - last;
    last = value;
    const small = difference | 0;
    if (small === difference && small < 0x2000_0000 && small >= -0x2000_0000) {
      let z = (small << 1) ^ (small >> 31);
      while (z > 127) {
        bytes[at++] = (z & 127) | 128;
        z >>>= 7;
      }
      bytes[at++] = z;
    } else {
      if (!Number.isSafeInteger(value) || difference > MAX_DIFFERENCE || difference < -MAX_DIFFERENCE) return -1;
      at = putVarint(difference, at);
    }
  }
  return at;
}

function putVarint(value: number, from: number): number {
  let at = from;
  let z = value < 0 ? -value * 2 - 1 : value * 2;
  while (z > 127) {
    scratch[at++] = (z % 128) + 128;
    z = Math.floor(z / 128);
  }
  scratch[at++] = z;
  return at;
}

/** Where `takeVarint` stands. */
let cursor = 0;

function takeVarint(block: Uint8Array): number {
  let byte = block[cursor++];
  if (byte < 128) return byte & 1 ? -(byte + 1) / 2 : byte / 2;
  let z = byte & 127;
  let weight = 128;
  do {
    byte = block[cursor++];
    z += (byte & 127) * weight;
    weight *= 128;
  } while (byte > 127);
  return z % 2 === 1 ? -(z + 1) / 2 : z / 2;
}

function decodeValues(block: Uint8Array, bytes: DataView, from: number, rows: number, bits: number): Float64Array {
  const values = new Float64Array(rows);
  let at = from;
  const sparse = (bits & BIT.sparse) !== 0;
  const map = at;
  if (sparse) at += (rows + 7) >> 3;
  const there = (i: number) => !sparse || (block[map + (i >> 3)] & (1 << (i & 7))) !== 0;
  if (bits & BIT.plain) {
    for (let i = 0; i < rows; i++) {
      if (!there(i)) {
        values[i] = NaN;
        continue;
      }
      values[i] = bytes.getFloat64(at, true);
      at += 8;
    }
    return values;
  }
  let last = 0;
  for (let i = 0; i < rows; i++) {
    if (sparse && !there(i)) {
      values[i] = NaN;
      continue;
    }
    const first = block[at++];
    if (first < 128) last += (first >>> 1) ^ -(first & 1);
    else {
      const second = block[at++];
      if (second < 128) {
        const z = (first & 127) | (second << 7);
        last += (z >>> 1) ^ -(z & 1);
      } else {
        cursor = at - 2;
        last += takeVarint(block);
        at = cursor;
      }
    }
    values[i] = last;
  }
  return values;
}
