import { Readable } from 'node:stream';
import { createGunzip, createInflateRaw } from 'node:zlib';
import { LogRefused } from '../../shared/columns/refusal.ts';

/** A zip file is read from its end, so it is held whole; larger ones are refused. */
const MAX_ZIP = 256 * 1024 * 1024;
/** Readings pack to a twentieth or so; what unpacks to more than this many times its size is no log. */
const MAX_RATIO = 100;
/** Below this size the ratio does not matter. */
const SMALL = 64 * 1024 * 1024;

const bomb = (): LogRefused =>
  new LogRefused('The packed file unpacks to far more than readings would: it is not read.');

async function* counted(packed: () => number, unpacked: AsyncIterable<Uint8Array>): AsyncGenerator<Uint8Array> {
  let total = 0;
  for await (const chunk of unpacked) {
    total += chunk.length;
    if (total > SMALL && total > packed() * MAX_RATIO) throw bomb();
    yield chunk;
  }
}

async function* inflated(source: AsyncIterable<Uint8Array>, way: 'gzip' | 'raw'): AsyncGenerator<Uint8Array> {
  let packed = 0;
  const input = Readable.from(
    (async function* () {
      for await (const chunk of source) {
        packed += chunk.length;
        yield chunk;
      }
    })(),
    { objectMode: false },
  );
  const unzip = way === 'gzip' ? createGunzip() : createInflateRaw();
  input.on('error', (error) => unzip.destroy(error));
  try {
    yield* counted(() => packed, input.pipe(unzip));
  } catch (error) {
    if (error instanceof Error && 'code' in error && String(error.code).startsWith('Z_'))
      throw new LogRefused('The packed file is damaged or cut short: it cannot be unpacked.');
    throw error;
  } finally {
    input.destroy();
    unzip.destroy();
  }
}

interface Entry {
  name: string;
  method: number;
  encrypted: boolean;
  packed: number;
  at: number;
}

/** The central directory of a zip file (APPNOTE 4.3.12, 4.3.16). */
function entriesOf(bytes: Buffer): Entry[] {
  const damaged = new LogRefused('The packed file is damaged or cut short: it cannot be unpacked.');
  let end = bytes.length - 22;
  while (end >= 0 && end > bytes.length - 65_558 && bytes.readUInt32LE(end) !== 0x06054b50) end--;
  if (end < 0 || bytes.readUInt32LE(end) !== 0x06054b50) throw damaged;
  const count = bytes.readUInt16LE(end + 10);
  let at = bytes.readUInt32LE(end + 16);
  const entries: Entry[] = [];
  for (let i = 0; i < count; i++) {
    if (at + 46 > bytes.length || bytes.readUInt32LE(at) !== 0x02014b50) throw damaged;
    const nameLength = bytes.readUInt16LE(at + 28);
    entries.push({
      name: bytes.toString('utf8', at + 46, at + 46 + nameLength),
      encrypted: (bytes.readUInt16LE(at + 8) & 1) === 1,
      method: bytes.readUInt16LE(at + 10),
      packed: bytes.readUInt32LE(at + 20),
      at: bytes.readUInt32LE(at + 42),
    });
    at += 46 + nameLength + bytes.readUInt16LE(at + 30) + bytes.readUInt16LE(at + 32);
  }
  return entries;
}

async function* unzipped(source: AsyncIterable<Uint8Array>): AsyncGenerator<Uint8Array> {
  const parts: Uint8Array[] = [];
  let size = 0;
  for await (const chunk of source) {
    size += chunk.length;
    if (size > MAX_ZIP) throw new LogRefused('The packed file is larger than 256 MB: unpack it first.');
    parts.push(chunk);
  }
  const bytes = Buffer.concat(parts);
  const entries = entriesOf(bytes);
  if (entries.some(({ name }) => name === '[Content_Types].xml'))
    throw new LogRefused('This is a spreadsheet workbook, not a CSV file. Save the sheet as CSV.');
  const files = entries.filter(
    ({ name }) => !name.endsWith('/') && !name.startsWith('__MACOSX/') && !/(?:^|\/)\./.test(name),
  );
  const tables = files.filter(({ name }) => /\.(?:csv|tsv|txt|log|dat)$/i.test(name));
  const chosen = tables.length > 0 ? tables : files;
  if (chosen.length !== 1)
    throw new LogRefused(`The packed file holds ${chosen.length} files: unpack it and bring them one by one.`);
  const [entry] = chosen;
  if (entry.encrypted) throw new LogRefused('The packed file is locked with a password: unpack it first.');
  if (entry.at + 30 > bytes.length || (entry.method !== 0 && entry.method !== 8))
    throw new LogRefused('The packed file is packed in a way that cannot be read here: unpack it first.');
  const from = entry.at + 30 + bytes.readUInt16LE(entry.at + 26) + bytes.readUInt16LE(entry.at + 28);
  const data = bytes.subarray(from, from + entry.packed);
  async function* one(): AsyncGenerator<Uint8Array> {
    yield data;
  }
  if (entry.method === 0) yield data;
  else yield* inflated(one(), 'raw');
}

/**
 * The bytes of a file, unpacked where it is gzip, or a zip with one table in it.
 * @throws LogRefused (while being read) if it cannot be unpacked, or unpacks to far too much
 */
export async function* unpacked(source: AsyncIterable<Uint8Array>): AsyncGenerator<Uint8Array> {
  const iterator = source[Symbol.asyncIterator]();
  const first: Uint8Array[] = [];
  let size = 0;
  let ended = false;
  while (size < 4 && !ended) {
    const { value, done } = await iterator.next();
    if (done) ended = true;
    else {
      first.push(value);
      size += value.length;
    }
  }
  async function* whole(): AsyncGenerator<Uint8Array> {
    try {
      yield* first;
      for (;;) {
        if (ended) return;
        const { value, done } = await iterator.next();
        if (done) return;
        yield value;
      }
    } finally {
      await iterator.return?.();
    }
  }
  const head = Buffer.concat(first);
  if (head[0] === 0x1f && head[1] === 0x8b) yield* inflated(whole(), 'gzip');
  else if (head.length >= 4 && head.readUInt32BE(0) === 0x504b0304) yield* unzipped(whole());
  else yield* whole();
}
