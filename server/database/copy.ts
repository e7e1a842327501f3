import { finished } from 'node:stream/promises';
import type pg from 'pg';
import { from as copyFrom, to as copyTo } from 'pg-copy-streams';
import type { Tx } from './connection.ts';

/** How a value is written in PostgreSQL's binary COPY format. */
export type ColumnType = 'text' | 'bytea' | 'int4' | 'float8' | 'bool' | 'date' | 'jsonb';

/** Rows go out in batches of about this size. */
const BATCH = 64 * 1024;
const SIGNATURE = Buffer.from('PGCOPY\n\xff\r\n\0\0\0\0\0\0\0\0\0', 'latin1');
const END = Buffer.from([0xff, 0xff]);
/** Days from 1970-01-01 to 2000-01-01, from which PostgreSQL counts. */
const EPOCH_DAYS = 10_957;

export type CopyValue = string | number | boolean | Uint8Array | null;

/**
 * Writes rows into a table by binary COPY on the transaction's own connection. No other statement may run on it
 * between the first row and `end`.
 */
export class CopyWriter {
  private readonly stream;
  private readonly closed: Promise<void>;
  private batch = Buffer.allocUnsafe(BATCH * 2);
  private used = 0;

  /**
   * @param table its name
   * @param columns name and type of each column that a row gives
   */
  constructor(
    tx: Tx,
    table: string,
    private readonly columns: readonly (readonly [name: string, type: ColumnType])[],
  ) {
    const names = columns.map(([name]) => name).join(', ');
    this.stream = tx.client.query(copyFrom(`copy ${table} (${names}) from stdin (format binary)`));
    this.closed = finished(this.stream);
    // Whoever awaits the end hears of it; until then it must not count as unhandled.
    this.closed.catch(() => undefined);
    this.used = SIGNATURE.copy(this.batch);
  }

  /**
   * Takes one row, its values in the order of the columns: a `date` as days since 1970-01-01, a `jsonb` as text.
   * @returns a promise when the connection is behind: await it before the next row
   */
  row(values: readonly CopyValue[]): Promise<void> | undefined {
    let size = 2;
    for (const value of values) size += 4 + (typeof value === 'string' ? value.length * 3 + 1 : sizeOf(value));
    if (this.used + size > this.batch.length) {
      const larger = Buffer.allocUnsafe(Math.max(this.used + size, BATCH * 2));
      this.batch.copy(larger, 0, 0, this.used);
      this.batch = larger;
    }
    let at = this.batch.writeInt16BE(values.length, this.used);
    for (let i = 0; i < values.length; i++) at = this.put(values[i], this.columns[i][1], at);
    this.used = at;
    return this.used >= BATCH ? this.send() : undefined;
  }

  /** Resolves when the table has all rows; throws what the database refused. */
  async end(): Promise<void> {
    this.stream.write(this.batch.subarray(0, this.used));
    this.stream.end(END);
    await this.closed;
  }

  private put(value: CopyValue, type: ColumnType, at: number): number {
    const { batch } = this;
    if (value === null) return batch.writeInt32BE(-1, at);
    switch (type) {
      case 'int4':
        return batch.writeInt32BE(value as number, batch.writeInt32BE(4, at));
      case 'date':
        return batch.writeInt32BE((value as number) - EPOCH_DAYS, batch.writeInt32BE(4, at));
      case 'float8':
        return batch.writeDoubleBE(value as number, batch.writeInt32BE(8, at));
      case 'bool':
        return batch.writeUInt8(value ? 1 : 0, batch.writeInt32BE(1, at));
      case 'bytea':
        batch.set(value as Uint8Array, at + 4);
        batch.writeInt32BE((value as Uint8Array).length, at);
        return at + 4 + (value as Uint8Array).length;
      case 'text':
      case 'jsonb': {
        const from = type === 'jsonb' ? batch.writeUInt8(1, at + 4) : at + 4;
        const end = from + batch.write(value as string, from);
        batch.writeInt32BE(end - at - 4, at);
        return end;
      }
    }
  }

  private send(): Promise<void> | undefined {
    const ready = this.stream.write(this.batch.subarray(0, this.used));
    this.batch = Buffer.allocUnsafe(BATCH * 2);
    this.used = 0;
    if (ready) return undefined;
    return new Promise((resolve, reject) => {
      const done = (error?: Error | null) => {
        this.stream.off('drain', done).off('error', done).off('close', done);
        if (error) reject(error);
        else resolve();
      };
      this.stream.once('drain', done).once('error', done).once('close', done);
    });
  }
}

function sizeOf(value: Exclude<CopyValue, string>): number {
  return value instanceof Uint8Array ? value.length : 8;
}

/**
 * Reads rows by binary COPY, which carries bytes as they are; the driver's own results carry them as text of twice the
 * length. A generator that is left early reads the rest before it lets go, so that the connection can be used again.
 *
 * @param client no other statement may run on it until the last row
 * @param sql a `select`; COPY takes no parameters, so every value in it must be made by `literal`
 * @returns per row its fields as PostgreSQL writes them in binary: `bytea` and `text` plain, `int4` big-endian
 */
export async function* copyRows(client: pg.ClientBase, sql: string): AsyncGenerator<(Buffer | null)[]> {
  const stream = client.query(copyTo(`copy (${sql}) to stdout (format binary)`));
  let pieces: Buffer[] = [];
  let size = 0;
  let wanted = SIGNATURE.length + 2;
  let started = false;
  try {
    for await (const piece of stream.iterator({ destroyOnReturn: false }) as AsyncIterable<Buffer>) {
      pieces.push(piece);
      size += piece.length;
      if (size < wanted) continue;
      const held: Buffer = pieces.length === 1 ? piece : Buffer.concat(pieces, size);
      let at = started ? 0 : SIGNATURE.length;
      started = true;
      for (;;) {
        const row = rowAt(held, at);
        if (typeof row === 'number') {
          wanted = row;
          break;
        }
        at = row.end;
        yield row.fields;
      }
      pieces = [held.subarray(at)];
      size = held.length - at;
    }
  } finally {
    if (!stream.readableEnded && !stream.destroyed) {
      stream.resume();
      await finished(stream).catch(() => undefined);
    }
  }
}

/** The row that begins at a place; else how many bytes from there it takes at the least. */
function rowAt(bytes: Buffer, from: number): { fields: (Buffer | null)[]; end: number } | number {
  if (bytes.length - from < 2) return 2;
  const count = bytes.readInt16BE(from);
  // The end: nothing is expected after it.
  if (count < 0) return Infinity;
  const fields: (Buffer | null)[] = [];
  let at = from + 2;
  for (let i = 0; i < count; i++) {
    if (bytes.length < at + 4) return at + 4 - from;
    const length = bytes.readInt32BE(at);
    at += 4;
    if (length < 0) fields.push(null);
    else {
      if (bytes.length < at + length) return at + length - from;
      fields.push(bytes.subarray(at, at + length));
      at += length;
    }
  }
  return { fields, end: at };
}

/** A value as SQL, for statements that take no parameters. */
export function literal(value: number | Uint8Array | string): string {
  if (typeof value === 'number') {
    if (!Number.isSafeInteger(value)) throw new RangeError(`${value} is no whole number.`);
    return String(value);
  }
  if (typeof value === 'string') {
    if (!/^[a-z0-9]{1,40}$/.test(value)) throw new RangeError('Only plain ids may stand in a statement.');
    return `'${value}'`;
  }
  return `'\\x${Buffer.from(value.buffer, value.byteOffset, value.length).toString('hex')}'::bytea`;
}
