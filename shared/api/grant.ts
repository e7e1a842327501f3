import { z } from 'zod';
import { Instant } from './common.ts';
import { ROLES } from './property.ts';

export const GRANT_STATUSES = ['given', 'accepted', 'ended', 'withdrawn'] as const;

/** A team's role at a property. */
export const Grant = z
  .object({
    id: z.string(),
    role: z.enum(ROLES),
    status: z.enum(GRANT_STATUSES).meta({ description: 'given: waits to be accepted; ended: its time has run out' }),
    email: z
      .string()
      .nullable()
      .meta({ description: 'To whom it was given; null for the team that added the property' }),
    team: z.string().nullable().meta({ description: 'Whose it is, once accepted' }),
    keeps: z.boolean().meta({ description: 'Whether that team keeps the property' }),
    givenAt: Instant,
    acceptedAt: Instant.nullable(),
    from: Instant.nullable(),
    until: Instant.nullable(),
    tracesConsent: z.boolean().nullable().meta({
      description: 'For an occupier: whether landlords may see anything finer than a day; null for other roles',
    }),
  })
  .meta({ id: 'Grant' });
export type Grant = z.infer<typeof Grant>;

export const GrantList = z.object({ grants: z.array(Grant) }).meta({ id: 'GrantList' });
export type GrantList = z.infer<typeof GrantList>;

export const NewGrant = z
  .strictObject({
    email: z.email('an e-mail address').max(320),
    role: z.enum(ROLES),
    from: Instant.optional().meta({ description: 'When it begins to hold; without it at once' }),
    until: Instant.optional().meta({ description: 'When it ends; without it, when it is withdrawn' }),
  })
  .refine(({ from, until }) => !until || Date.parse(until) > (from ? Date.parse(from) : -Infinity), {
    path: ['until'],
    message: 'later than from',
  })
  .meta({ id: 'NewGrant' });
export type NewGrant = z.infer<typeof NewGrant>;

/** A grant as the person sees it to whom it was given. */
export const Offer = z
  .object({
    id: z.string(),
    role: z.enum(ROLES),
    property: z.object({ id: z.string(), name: z.string() }),
    givenAt: Instant,
    until: Instant.nullable(),
  })
  .meta({ id: 'Offer' });
export type Offer = z.infer<typeof Offer>;
export const OfferList = z.object({ offers: z.array(Offer) }).meta({ id: 'OfferList' });
export type OfferList = z.infer<typeof OfferList>;

export const AcceptGrant = z
  .strictObject({
    teamId: z.string().optional().meta({ description: 'Which of one’s teams; without it one that fits the role' }),
  })
  .meta({ id: 'AcceptGrant' });

export const Consent = z
  .strictObject({ traces: z.boolean().meta({ description: 'Landlords may see anything finer than a day' }) })
  .meta({ id: 'Consent' });
export type Consent = z.infer<typeof Consent>;

export const Trail = z
  .object({
    entries: z.array(
      z.object({
        at: Instant,
        who: z.string().nullable().meta({ description: 'null: someone who is no longer here, or the service itself' }),
        act: z.string(),
        about: z.record(z.string(), z.unknown()),
      }),
    ),
  })
  .meta({ id: 'Trail' });
export type Trail = z.infer<typeof Trail>;

export const TeamList = z
  .object({
    teams: z.array(
      z.object({
        id: z.string(),
        kind: z.enum(['household', 'firm', 'landlord']),
        name: z.string(),
        role: z.enum(['owner', 'member', 'reader']),
      }),
    ),
  })
  .meta({ id: 'TeamList' });
export type TeamList = z.infer<typeof TeamList>;
