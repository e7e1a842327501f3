import type { Request, RequestHandler, Response } from 'express';
import { TeamList } from '../../shared/api/grant.ts';
import { NewToken, SessionAnswer, SignIn, TokenList, TokenMade } from '../../shared/api/session.ts';
import type { Deps } from '../deps.ts';
import { problem } from '../http/problems.ts';
import { defineRoute } from '../http/route.ts';
import type { Route } from '../http/route.ts';
import { cookieName } from '../http/session.ts';
import type { PassportInstance } from '../http/session.ts';
import { listTokens, makeToken, rememberDevice, revokeToken, teamsOf } from './accounts.service.ts';
import type { Person } from './accounts.service.ts';
import { deviceOf, setDevice, signInLimits } from './devices.ts';
import { newSecret } from './ids.ts';

const tag = 'Session and tokens';
const userOf = ({ id, email, name }: Person) => ({ user: { id, email, name } });

export const accountRoutes = (passport: PassportInstance): Route[] => [
  defineRoute({
    method: 'post',
    path: '/api/session',
    policy: 'anyone',
    tag,
    summary: 'Sign in',
    description:
      'Begins a session and sets its cookie. Unknown addresses and wrong passwords are answered alike. Failures are ' +
      'limited per account and per network address; a device on which the person signed in before is counted apart, ' +
      'so that nobody can lock them out.',
    body: SignIn,
    answers: { 200: { description: 'The person', schema: SessionAnswer } },
    problems: ['wrong-credentials', 'too-many'],
    before: signInLimits,
    handle: async ({ deps, req, res }) => {
      if (!req.session) throw problem('bad-request', 'A call with a token begins no session: leave out Authorization.');
      const person = await byPassword(passport, req, res);
      if (!person) throw problem('wrong-credentials');
      await begin(deps, req, person);
      const device = deviceOf(deps, req) ?? newSecret();
      await rememberDevice(deps.db, person.id, device);
      setDevice(deps, res, device);
      return { status: 200, body: userOf(person) };
    },
  }),
  defineRoute({
    method: 'get',
    path: '/api/session',
    policy: 'signedIn',
    tag,
    summary: 'Who is signed in',
    answers: { 200: { description: 'The person', schema: SessionAnswer } },
    handle: async ({ person }) => ({ status: 200, body: userOf(person) }),
  }),
  defineRoute({
    method: 'delete',
    path: '/api/session',
    policy: 'signedIn',
    tag,
    summary: 'Sign out',
    answers: { 204: { description: 'The session has ended' } },
    handle: async ({ deps, req, res }) => {
      if (req.session)
        await new Promise<void>((done, fail) =>
          req.session.destroy((error: unknown) => (error ? fail(error) : done())),
        );
      res.clearCookie(cookieName(deps, 'session'), { path: '/' });
      return { status: 204 };
    },
  }),
  defineRoute({
    method: 'get',
    path: '/api/tokens',
    policy: 'signedIn',
    tag,
    summary: 'One’s own tokens',
    answers: { 200: { description: 'The tokens, without their secrets', schema: TokenList } },
    handle: async ({ deps, person }) => ({ status: 200, body: await listTokens(deps.db, person.id) }),
  }),
  defineRoute({
    method: 'post',
    path: '/api/tokens',
    policy: 'signedIn',
    tag,
    summary: 'Make a token for a script',
    description: 'A token can do what its owner can, until it is revoked. Send it as “Authorization: Bearer …”.',
    body: NewToken,
    answers: { 201: { description: 'The token; it is shown this once', schema: TokenMade } },
    handle: async ({ deps, person, body }) => ({ status: 201, body: await makeToken(deps.db, person.id, body.name) }),
  }),
  defineRoute({
    method: 'delete',
    path: '/api/tokens/:id',
    policy: 'signedIn',
    tag,
    summary: 'Revoke a token',
    answers: { 204: { description: 'It is refused from now on' } },
    problems: ['not-found'],
    handle: async ({ deps, person, params }) => {
      await revokeToken(deps.db, person.id, params.id);
      return { status: 204 };
    },
  }),
  defineRoute({
    method: 'get',
    path: '/api/teams',
    policy: 'signedIn',
    tag,
    summary: 'One’s own teams',
    answers: { 200: { description: 'The one joined first at the front', schema: TeamList } },
    handle: async ({ deps, person }) => ({ status: 200, body: { teams: await teamsOf(deps.db, person.id) } }),
  }),
];

function byPassword(passport: PassportInstance, req: Request, res: Response): Promise<Person | null> {
  return new Promise((resolve, reject) => {
    const decided = (error: unknown, person?: Person | false | null) =>
      error ? reject(error) : resolve(person || null);
    const authenticate = passport.authenticate('local', decided) as RequestHandler;
    authenticate(req, res, reject);
  });
}

/** Begins a session under a new id, whatever the browser brought. */
async function begin({ now }: Deps, req: Request, person: Person): Promise<void> {
  await new Promise<void>((done, fail) => req.login(person, (error: unknown) => (error ? fail(error) : done())));
  req.session.startedAt = req.session.seenAt = now().getTime();
}
