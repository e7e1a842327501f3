import type { SessionAnswer, SignIn, TokenList, TokenMade } from '../../shared/api/session.ts';
import { api } from './client.ts';

export const readSession = () => api.get<SessionAnswer>('/api/session', { quiet: true });
export const signIn = (body: SignIn) => api.post<SessionAnswer>('/api/session', body, { quiet: true });
export const signOut = () => api.delete('/api/session', { quiet: true });
export const listTokens = (signal?: AbortSignal) => api.get<TokenList>('/api/tokens', { signal });
export const makeToken = (name: string) => api.post<TokenMade>('/api/tokens', { name });
export const revokeToken = (id: string) => api.delete(`/api/tokens/${encodeURIComponent(id)}`);
