import { EventEmitter } from 'node:events';
import pg from 'pg';
import type { Database, Tx } from './connection.ts';

const CHANNEL = 'coppernoon';
const RETRY_MS = 500;
/** The listening connection is let go when nobody has waited for so long. */
const IDLE_MS = 30_000;

/** What can be waited for: a log (by its id) or a property's figures. */
export type Subject = `log:${string}` | `property:${string}`;

/** Tells every process, when the transaction commits, that something changed. */
export async function announce(tx: Pick<Tx, 'query'>, subject: Subject): Promise<void> {
  await tx.query('select pg_notify($1, $2)', [CHANNEL, subject]);
}

/**
 * One listening connection for all who wait in this process. It is opened for the first of them, opened again when it
 * breaks, and whoever waits is then woken to look for themselves: what was announced meanwhile nobody heard.
 */
class Notices {
  private readonly events = new EventEmitter().setMaxListeners(0);
  private client: pg.Client | null = null;
  private opening: Promise<void> | null = null;
  private idle: NodeJS.Timeout | undefined;
  private waiting = 0;

  constructor(private readonly url: string) {}

  /** Resolves when the subject is announced, at the signal, or after `ms`; begins to listen before it returns. */
  async next(subject: Subject, ms: number, signal?: AbortSignal): Promise<{ heard: Promise<void> }> {
    clearTimeout(this.idle);
    this.waiting++;
    await this.open().catch(() => undefined);
    const heard = new Promise<void>((resolve) => {
      const done = () => {
        clearTimeout(timer);
        this.events.off(subject, done).off('again', done);
        signal?.removeEventListener('abort', done);
        if (--this.waiting === 0) this.idle = setTimeout(() => this.close(), IDLE_MS).unref();
        resolve();
      };
      const timer = setTimeout(done, Math.max(0, ms));
      this.events.once(subject, done).once('again', done);
      signal?.addEventListener('abort', done);
      if (signal?.aborted) done();
    });
    return { heard };
  }

  private open(): Promise<void> {
    if (this.client) return Promise.resolve();
    this.opening ??= this.connect().finally(() => (this.opening = null));
    return this.opening;
  }

  private async connect(): Promise<void> {
    const client = new pg.Client({ connectionString: this.url, keepAlive: true });
    const lost = () => {
      if (this.client !== client && this.client !== null) return;
      this.client = null;
      if (this.waiting > 0) setTimeout(() => void this.reopen(), RETRY_MS).unref();
    };
    client.on('error', lost);
    client.on('end', lost);
    client.on('notification', ({ payload }) => payload && this.events.emit(payload));
    await client.connect();
    await client.query(`listen ${CHANNEL}`);
    this.client = client;
  }

  private async reopen(): Promise<void> {
    if (this.client || this.waiting === 0) return;
    try {
      await this.open();
      this.events.emit('again');
    } catch {
      setTimeout(() => void this.reopen(), RETRY_MS).unref();
    }
  }

  private close(): void {
    const { client } = this;
    this.client = null;
    client?.removeAllListeners('end');
    client?.end().catch(() => undefined);
  }
}

const byDatabase = new WeakMap<Database, Notices>();

function noticesOf(db: Database): Notices {
  let notices = byDatabase.get(db);
  if (!notices) byDatabase.set(db, (notices = new Notices(db.pool.options.connectionString ?? '')));
  return notices;
}

/**
 * Looks until what is seen will do, again whenever the subject is announced.
 *
 * @param look reads the present state
 * @param enough whether to stop waiting
 * @param ms at most so long
 * @returns the last state seen
 */
export async function lookUntil<State>(
  db: Database,
  subject: Subject,
  look: () => Promise<State>,
  enough: (state: State) => boolean,
  ms: number,
  signal?: AbortSignal,
): Promise<State> {
  const until = performance.now() + ms;
  let state = await look();
  while (!enough(state) && performance.now() < until && !signal?.aborted) {
    const seen = new AbortController();
    try {
      // Listening begins before the look, so that no change falls between them.
      const waiting = AbortSignal.any(signal ? [signal, seen.signal] : [seen.signal]);
      const { heard } = await noticesOf(db).next(subject, until - performance.now(), waiting);
      state = await look();
      if (enough(state)) break;
      await heard;
    } finally {
      seen.abort();
    }
    state = await look();
  }
  return state;
}
