import type { Consent, Grant, GrantList, NewGrant, Offer, OfferList } from '../../shared/api/grant.ts';
import { api } from './client.ts';

const at = (id: string): string => `/api/properties/${encodeURIComponent(id)}`;
const one = (id: string): string => `/api/grants/${encodeURIComponent(id)}`;

export const listGrants = (propertyId: string, signal?: AbortSignal) =>
  api.get<GrantList>(`${at(propertyId)}/grants`, { signal });
export const giveGrant = (propertyId: string, grant: NewGrant) => api.post<Grant>(`${at(propertyId)}/grants`, grant);
export const withdrawGrant = (propertyId: string, grantId: string) =>
  api.delete(`${at(propertyId)}/grants/${encodeURIComponent(grantId)}`);
export const putConsent = (propertyId: string, consent: Consent) =>
  api.put<Consent>(`${at(propertyId)}/consent`, consent);
/** What was given to the person who is signed in, and waits for an answer. */
export const listOffers = (signal?: AbortSignal) => api.get<OfferList>('/api/grants', { signal });
export const acceptGrant = (grantId: string) => api.post<Offer>(`${one(grantId)}/accept`, {});
export const declineGrant = (grantId: string) => api.delete(one(grantId));
