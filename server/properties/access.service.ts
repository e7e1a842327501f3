import type { Role } from '../../shared/api/property.ts';
import type { Scope } from '../database/connection.ts';
import { problem } from '../http/problems.ts';
import type { Problem } from '../http/problems.ts';
import { heldGrants } from './grants.repository.ts';
import type { HeldGrant } from './grants.repository.ts';

/**
 * What one can do at a property: see it and its record; see daily figures; see anything finer than a day,
 * originals and rejected rows; send logs and withdraw them; change the record; give and withdraw grants;
 * let landlords see traces.
 */
export const PROPERTY_ACTIONS = ['see', 'days', 'traces', 'upload', 'edit', 'grants', 'consent'] as const;
export type PropertyAction = (typeof PROPERTY_ACTIONS)[number];

export interface PropertyAccess {
  propertyId: string;
  /** The caller's role; of several the nearest to the home. */
  role: Role;
  /** The teams by which the caller has sight of the property. */
  teamIds: string[];
  /** Whether every occupier lets landlords see anything finer than a day. */
  tracesConsent: boolean;
  may(action: PropertyAction): boolean;
  /** Throws the 403 that names what is missing. */
  require(action: PropertyAction): void;
}

/**
 * What this person may do at this property, through the grants of their teams that hold at this moment;
 * null if they may not know of it. Nothing but a grant gives sight: no administrator's flag, no authorship.
 */
export async function propertyAccess(
  scope: Scope,
  personId: string,
  propertyId: string,
): Promise<PropertyAccess | null> {
  if (!/^[a-z0-9]{16}$/.test(propertyId)) return null;
  return accessBy(propertyId, await heldGrants(scope, personId, propertyId));
}

/** The same, worked out from the grants that hold. */
export function accessBy(propertyId: string, grants: HeldGrant[]): PropertyAccess | null {
  const role = NEAREST.find((candidate) => grants.some((grant) => grant.role === candidate));
  if (!role) return null;
  const refusal = (action: PropertyAction) => REFUSALS[action](grants);
  return {
    propertyId,
    role,
    teamIds: [...new Set(grants.map((grant) => grant.teamId))],
    tracesConsent: grants.some((grant) => grant.consent),
    may: (action) => refusal(action) === null,
    require: (action) => {
      const refused = refusal(action);
      if (refused) throw refused;
    },
  };
}

const NEAREST: readonly Role[] = ['occupier', 'installer', 'landlord'];

type Refusal = (grants: HeldGrant[]) => Problem | null;

const allowed: Refusal = () => null;

/** A team's readers look and do not touch. */
const acts =
  (act: string): Refusal =>
  (grants) =>
    grants.some((grant) => grant.member !== 'reader')
      ? null
      : problem(
          'forbidden',
          `In your team you are a reader, which does not include to ${act}. Ask an owner of the team.`,
        );

const REFUSALS: Record<PropertyAction, Refusal> = {
  see: allowed,
  days: allowed,
  traces: (grants) => (grants.some(seesTraces) ? null : problem('no-consent')),
  upload: acts('send or withdraw logs'),
  edit: acts('change the record'),
  grants: (grants) =>
    acts('give or withdraw grants')(grants) ??
    (grants.some((grant) => grant.member !== 'reader' && (grant.role !== 'installer' || grant.keeps))
      ? null
      : problem('forbidden', 'Grants are given by the occupier, the landlord or the team that keeps the property.')),
  consent: (grants) =>
    grants.some((grant) => grant.role === 'occupier' && grant.member !== 'reader')
      ? null
      : problem('forbidden', 'Only the occupier can consent to traces.'),
};

/** A landlord needs consent, and cannot get round it by sending an installer in their own name. */
function seesTraces({ role, givenAs, consent }: HeldGrant): boolean {
  if (role === 'occupier' || consent) return true;
  return role === 'installer' && givenAs !== 'landlord';
}
