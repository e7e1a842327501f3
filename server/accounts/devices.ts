import type { Request, RequestHandler, Response } from 'express';
import { ipKeyGenerator } from 'express-rate-limit';
import type { Deps } from '../deps.ts';
import { limited } from '../http/limits.ts';
import { cookieName, isSecure } from '../http/session.ts';
import { deviceIsKnown } from './accounts.service.ts';

declare module 'express-serve-static-core' {
  interface Locals {
    knownDevice?: boolean;
  }
}

const YEAR_MS = 365 * 24 * 3600 * 1000;
const MINUTES = 60;

/** The mark of a device on which somebody signed in before; it gives no access by itself. */
export function deviceOf(deps: Pick<Deps, 'config'>, req: Request): string | undefined {
  const name = cookieName(deps, 'device');
  for (const part of (req.headers.cookie ?? '').split(';')) {
    const [key, value] = part.trim().split('=', 2);
    if (key === name && value) return value;
  }
  return undefined;
}

export function setDevice(deps: Pick<Deps, 'config'>, res: Response, device: string): void {
  res.cookie(cookieName(deps, 'device'), device, {
    httpOnly: true,
    sameSite: 'lax',
    secure: isSecure(deps),
    path: '/',
    maxAge: YEAR_MS,
  });
}

/**
 * Limits of failed sign-ins. Strangers are counted per account and address, per account, and per address;
 * a device known to the account has a count of its own, so that strangers cannot lock the owner out.
 */
export function signInLimits(deps: Deps): RequestHandler[] {
  const account = (req: Request) =>
    String((req.body as { email?: unknown } | undefined)?.email ?? '')
      .trim()
      .toLowerCase();
  const address = (req: Request) => ipKeyGenerator(req.ip ?? '', 64);
  const counts = (res: Response) => res.statusCode === 401;
  const known = (_req: Request, res: Response) => res.locals.knownDevice === true;
  const strange = (req: Request, res: Response) => !known(req, res);
  const limit = { counts, windowSeconds: 15 * MINUTES };
  return [
    async (req, res, next) => {
      res.locals.knownDevice = await deviceIsKnown(deps.db, account(req), deviceOf(deps, req));
      next();
    },
    limited(deps.db, {
      ...limit,
      name: 'sign-in: known device',
      limit: 20,
      key: (req) => `${account(req)}\n${deviceOf(deps, req)}`,
      skip: strange,
    }),
    limited(deps.db, {
      ...limit,
      name: 'sign-in: account and address',
      limit: 10,
      key: (req) => `${account(req)}\n${address(req)}`,
      skip: known,
    }),
    limited(deps.db, {
      ...limit,
      name: 'sign-in: account',
      limit: 100,
      windowSeconds: 60 * MINUTES,
      key: account,
      skip: known,
    }),
    limited(deps.db, { ...limit, name: 'sign-in: address', limit: 100, key: address, skip: known }),
  ];
}
