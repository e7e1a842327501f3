import { createHash } from 'node:crypto';
import type { Database, Tx } from '../database/connection.ts';
import { problem } from '../http/problems.ts';
import * as repository from './originals.repository.ts';
import type { Original } from './originals.repository.ts';

export type { Original } from './originals.repository.ts';

/** Where files are cut. Part of what their hashes mean, and so of repeats being found: never changed. */
const CHUNK = 1 << 20;

const sha256 = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest();

/**
 * Writes an upload's bytes to the database while they stream in, chunk by chunk, without holding a connection in
 * between. A chunk that the property has already is not written again: the same file costs nothing, and one that has
 * grown only what is new.
 */
export class OriginalWriter {
  bytes = 0;
  private chunk = Buffer.allocUnsafe(CHUNK);
  private used = 0;
  private readonly hashes: Buffer[] = [];
  /** The write under way; one at a time, while the next chunk fills. */
  private writing: Promise<void> = Promise.resolve();

  /** @param room how many bytes may come before the quota is used up */
  constructor(
    private readonly db: Database,
    private readonly propertyId: string,
    private readonly room: number,
  ) {}

  /** Takes the next bytes; await it before the following ones. */
  async push(bytes: Buffer): Promise<void> {
    this.bytes += bytes.length;
    if (this.bytes > this.room) throw quotaReached();
    for (let at = 0; at < bytes.length;) {
      const taken = bytes.copy(this.chunk, this.used, at);
      at += taken;
      this.used += taken;
      if (this.used === CHUNK) await this.flush();
    }
  }

  /** The original, all its chunks written but not yet durable: `keepOriginal` sees to that. */
  async end(): Promise<Original> {
    if (this.used > 0) await this.flush();
    await this.writing;
    return { hash: sha256(Buffer.concat(this.hashes)), bytes: this.bytes, chunks: this.hashes };
  }

  /** Takes back what was written, as far as no original has it. */
  async discard(): Promise<void> {
    await this.writing.catch(() => undefined);
    await repository.dropArriving(this.db, this.propertyId, this.hashes);
  }

  private async flush(): Promise<void> {
    const data = this.chunk.subarray(0, this.used);
    this.chunk = Buffer.allocUnsafe(CHUNK);
    this.used = 0;
    const hash = sha256(data);
    this.hashes.push(hash);
    await this.writing;
    this.writing = this.write(hash, data);
    // Heard of at the next await; until then it must not count as unhandled.
    this.writing.catch(() => undefined);
  }

  private async write(hash: Buffer, data: Buffer): Promise<void> {
    if (await repository.hasChunk(this.db, this.propertyId, hash)) return;
    await repository.putChunk(this.db, this.propertyId, hash, data);
  }
}

const quotaReached = () =>
  problem(
    'too-large',
    'The storage for original files of the team that keeps this property is used up. Nothing of this file was kept.',
  );

/** What uploads that were broken off have left behind; the sweep runs these. */
export { LEFTOVERS } from './originals.repository.ts';

/** How many bytes of originals may still come to a property. */
export async function storageRoom(db: Database, propertyId: string, quotaBytes: number): Promise<number> {
  return quotaBytes - (await repository.storageUsed(db, propertyId));
}

/**
 * Keeps what was written as an original, once for the same bytes. After the commit it is there, crash or not.
 * @throws Problem if that would pass the quota, or if the chunks have waited too long
 */
export async function keepOriginal(tx: Tx, propertyId: string, original: Original, quotaBytes: number): Promise<void> {
  if (!(await repository.insertOriginal(tx, propertyId, original))) return;
  if (!(await repository.settleChunks(tx, propertyId, original.chunks)))
    throw problem('unavailable', 'The upload took so long that its first part is gone. Send the file again.');
  if ((await repository.addStorage(tx, propertyId, original.bytes)) > quotaBytes) throw quotaReached();
}

/**
 * The bytes of an original, a chunk at a time; the next one is fetched while one is used.
 */
export async function* originalBytes(db: Database, propertyId: string, hash: Buffer): AsyncGenerator<Buffer> {
  const original = await repository.findOriginal(db, propertyId, hash);
  if (!original) throw new Error('An original is gone.');
  const fetched = (n: number) => {
    if (n >= original.chunks.length) return null;
    const chunk = repository.readChunk(db, propertyId, original.chunks[n]);
    chunk.catch(() => undefined);
    return chunk;
  };
  let next = fetched(0);
  for (let n = 0; next; n++) {
    const chunk = await next;
    next = fetched(n + 1);
    yield chunk;
  }
}

/** The first bytes of an original. */
export async function originalHead(db: Database, propertyId: string, hash: Buffer, bytes: number): Promise<Buffer> {
  for await (const chunk of originalBytes(db, propertyId, hash)) return chunk.subarray(0, bytes);
  return Buffer.alloc(0);
}
