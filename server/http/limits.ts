import { createHash } from 'node:crypto';
import type { Request, RequestHandler, Response } from 'express';
import { rateLimit } from 'express-rate-limit';
import type { ClientRateLimitInfo, Store } from 'express-rate-limit';
import type { Database } from '../database/connection.ts';
import { problem } from './problems.ts';

interface Limit {
  /** Unique among limits; part of what is counted. */
  name: string;
  /** How many are let through in one window. */
  limit: number;
  windowSeconds: number;
  /** What is counted together, such as an address or an account; kept hashed. */
  key: (req: Request, res: Response) => string;
  /** Requests that this limit leaves alone. */
  skip?: (req: Request, res: Response) => boolean | Promise<boolean>;
  /** Which answers count; without it all do. */
  counts?: (res: Response) => boolean;
}

/**
 * A limit counted in PostgreSQL, so that it holds over any number of web processes. Past it the answer
 * is 429 with Retry-After.
 */
export function limited(db: Database, { name, limit, windowSeconds, key, skip, counts }: Limit): RequestHandler {
  return rateLimit({
    windowMs: windowSeconds * 1000,
    limit,
    store: counterStore(db, name, windowSeconds),
    keyGenerator: key,
    skip: skip ?? (() => false),
    skipSuccessfulRequests: counts !== undefined,
    requestWasSuccessful: (_req, res) => !counts?.(res),
    standardHeaders: false,
    legacyHeaders: false,
    validate: false,
    handler: (req, _res, next) => {
      const { rateLimit: state } = req as Request & { rateLimit?: { resetTime?: Date } };
      const seconds = Math.max(1, Math.ceil(((state?.resetTime?.getTime() ?? 0) - Date.now()) / 1000));
      next(
        problem('too-many', `Too many attempts. Wait ${seconds} s, then try again.`, {
          headers: { 'Retry-After': String(seconds) },
        }),
      );
    },
  });
}

function counterStore(db: Database, name: string, windowSeconds: number): Store {
  const row = (key: string) => createHash('sha256').update(`${name}\n${key}`).digest('base64url');
  return {
    localKeys: false,
    async increment(key): Promise<ClientRateLimitInfo> {
      const [counter] = await db.query<{ hits: number; ends_at: Date }>(
        `insert into counters as c (key, hits, ends_at) values ($1, 1, now() + $2 * interval '1 second')
         on conflict (key) do update set
           hits = case when c.ends_at <= now() then 1 else c.hits + 1 end,
           ends_at = case when c.ends_at <= now() then excluded.ends_at else c.ends_at end
         returning hits, ends_at`,
        [row(key), windowSeconds],
      );
      return { totalHits: counter?.hits ?? 1, resetTime: counter?.ends_at };
    },
    async decrement(key) {
      await db.query('update counters set hits = hits - 1 where key = $1 and hits > 0', [row(key)]);
    },
    async resetKey(key) {
      await db.query('delete from counters where key = $1', [row(key)]);
    },
  };
}
