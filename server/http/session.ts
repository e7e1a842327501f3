import pgSession from 'connect-pg-simple';
import type { Request, RequestHandler, Response } from 'express';
import session from 'express-session';
import { Passport } from 'passport';
import { Strategy } from 'passport-local';
import { personById, personByPassword, personByToken } from '../accounts/accounts.service.ts';
import type { Person } from '../accounts/accounts.service.ts';
import { newSecret } from '../accounts/ids.ts';
import type { Database } from '../database/connection.ts';
import type { Deps } from '../deps.ts';

declare module 'express-session' {
  interface SessionData {
    startedAt: number;
    seenAt: number;
  }
}
declare module 'express-serve-static-core' {
  interface Locals {
    caller?: Caller;
  }
}

/** Who is calling, and by what; a wrong token is a caller without a person. */
export interface Caller {
  person: Person | null;
  by: 'cookie' | 'token' | null;
}

export type PassportInstance = InstanceType<typeof Passport>;

const MINUTE = 60_000;
/** A session ends when it was not used for so long, and in any case after the second. */
export const IDLE_MS = 7 * 24 * 60 * MINUTE;
export const ABSOLUTE_MS = 30 * 24 * 60 * MINUTE;

export const isSecure = ({ config }: Pick<Deps, 'config'>) => config.baseUrl?.startsWith('https://') ?? false;
export const cookieName = (deps: Pick<Deps, 'config'>, name: string) =>
  isSecure(deps) ? `__Host-coppernoon-${name}` : `coppernoon-${name}`;

/** One instance per app: sign-in by address and password, sessions that hold a person's id. */
export function makePassport({ db }: Pick<Deps, 'db'>): PassportInstance {
  const passport = new Passport();
  passport.use(
    new Strategy({ usernameField: 'email' }, (email, password, done) => {
      personByPassword(db, email, password).then((person) => done(null, person ?? false), done);
    }),
  );
  passport.serializeUser((user, done) => done(null, (user as Person).id));
  passport.deserializeUser((id: string, done) => {
    personById(db, id).then((person) => done(null, person ?? false), done);
  });
  return passport;
}

/** The key that signs cookies: one for all processes, made once and kept in the database. */
export async function signingSecret(db: Database): Promise<string> {
  const [row] = await db.query<{ value: string }>(
    `with made as (insert into secrets (name, value) values ('session', $1) on conflict do nothing returning value)
     select value from made union all select value from secrets where name = 'session'`,
    [newSecret()],
  );
  if (!row) return signingSecret(db);
  return row.value;
}

/**
 * Finds out who calls. With a bearer token the cookie is not looked at, so that a token's call can never
 * fall back on a browser's session.
 */
export function callers(deps: Deps, passport: PassportInstance, secret: string): RequestHandler[] {
  const secure = isSecure(deps);
  const name = cookieName(deps, 'session');
  const Store = pgSession(session);
  const cookie = [
    session({
      name,
      secret,
      store: new Store({ pool: deps.db.pool, tableName: 'sessions', pruneSessionInterval: false, disableTouch: true }),
      resave: false,
      saveUninitialized: false,
      cookie: { httpOnly: true, sameSite: 'lax', secure, path: '/', maxAge: ABSOLUTE_MS },
      proxy: secure || undefined,
    }),
    limitAge(deps),
    passport.session(),
  ];
  // Whoever has no session and begins none needs no session made for them.
  const isCookieCall = (req: Request, res: Response) =>
    !res.locals.caller && (req.method === 'POST' || (req.headers.cookie?.includes(name) ?? false));
  const whereCookie =
    (handler: RequestHandler): RequestHandler =>
    (req, res, next) =>
      isCookieCall(req, res) ? handler(req, res, next) : next();
  return [
    (req, _res, next) => {
      // People reach us by the configured https address only, whatever the last hop before us spoke.
      if (secure) req.headers['x-forwarded-proto'] = 'https';
      next();
    },
    async (req, res, next) => {
      const token = bearerOf(req);
      if (token !== null) res.locals.caller = { person: await personByToken(deps.db, token), by: 'token' };
      next();
    },
    ...cookie.map(whereCookie),
    (req, res, next) => {
      const person = (req.user as Person | undefined) ?? null;
      res.locals.caller ??= { person, by: person ? 'cookie' : null };
      next();
    },
  ];
}

function bearerOf(req: Request): string | null {
  return /^bearer +(\S+) *$/i.exec(req.headers.authorization ?? '')?.[1] ?? null;
}

/**
 * Ends sessions past their limits. Use is noted at most once a minute, and straight in the table: saving
 * the session at the end of a slow request could bring back one that was ended meanwhile.
 */
function limitAge({ db, now }: Deps): RequestHandler {
  return async (req, _res, next) => {
    const at = now().getTime();
    const { startedAt, seenAt } = req.session;
    if (startedAt === undefined || seenAt === undefined) return next();
    if (at - seenAt > IDLE_MS || at - startedAt > ABSOLUTE_MS) return req.session.regenerate(next);
    if (at - seenAt > MINUTE)
      await db.query(
        `update sessions set sess = jsonb_set(sess::jsonb, '{seenAt}', to_jsonb($2::bigint))::json where sid = $1`,
        [req.sessionID, at],
      );
    next();
  };
}
