import type { Role } from '../../../shared/api/property.ts';

/** What each role is, in words for the person who gives it. */
export const ROLE_WORDS: Record<Role, { name: string; says: string }> = {
  occupier: { name: 'Occupier', says: 'Lives there. Sees everything, sends logs, decides who else sees it.' },
  installer: { name: 'Installer', says: 'Looks after the system. Sees traces and keeps the system record.' },
  landlord: {
    name: 'Landlord',
    says: 'Owns the property. Sees daily figures; traces only with the occupier’s consent.',
  },
};

export const ROLE_OPTIONS = (Object.keys(ROLE_WORDS) as Role[]).map((value) => ({
  value: value as string,
  title: ROLE_WORDS[value].name,
  reason: ROLE_WORDS[value].says,
}));
