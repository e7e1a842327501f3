import type { Request, Response } from 'express';
import type { Person } from '../accounts/accounts.service.ts';
import type { Deps } from '../deps.ts';
import { propertyAccess } from '../properties/access.service.ts';
import type { PropertyAccess } from '../properties/access.service.ts';
import { problem } from './problems.ts';
import { propertyIdOf } from './route.ts';
import type { Policy } from './route.ts';

const SAFE = new Set(['GET', 'HEAD', 'OPTIONS']);

export interface Admission {
  person: Person | null;
  access: PropertyAccess | null;
}

/**
 * Decides whether this request may go on, in the order of what it may give away: no session 401, another
 * site's page 403, a property one may not know of 404, an act above one's role 403.
 */
export async function admit(deps: Deps, policy: Policy, req: Request, res: Response): Promise<Admission> {
  const { person, by } = res.locals.caller ?? { person: null, by: null };
  if (policy !== 'anyone' && !person) throw problem('no-session', undefined, { headers: UNAUTHENTICATED });
  if (by !== 'token' && !SAFE.has(req.method)) checkOrigin(deps, req);
  const about = propertyIdOf(policy, String(req.params['id'] ?? ''));
  if (!about || !person) return { person, access: null };
  const access = await propertyAccess(deps.db, person.id, about.propertyId);
  if (!access) throw problem('not-found');
  access.require(about.action);
  return { person, access };
}

const UNAUTHENTICATED = { 'WWW-Authenticate': 'Bearer' };

/**
 * Refuses what another site's page sends with our cookie. A browser always names itself by one of two
 * headers; a request with neither is a script's.
 */
function checkOrigin({ config }: Deps, req: Request): void {
  const origin = req.get('origin');
  const site = req.get('sec-fetch-site');
  if (origin !== undefined) {
    if (origin !== (config.baseUrl ?? `${req.protocol}://${req.host}`)) throw problem('foreign-origin');
  } else if (site !== undefined && site !== 'same-origin' && site !== 'none') throw problem('foreign-origin');
}
