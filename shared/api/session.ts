import { z } from 'zod';

export const User = z.object({ id: z.string(), email: z.string(), name: z.string() }).meta({ id: 'User' });
export type User = z.infer<typeof User>;

export const SignIn = z
  .strictObject({ email: z.string().max(320), password: z.string().max(1024) })
  .meta({ id: 'SignIn' });
export type SignIn = z.infer<typeof SignIn>;

export const SessionAnswer = z.object({ user: User }).meta({ id: 'Session' });
export type SessionAnswer = z.infer<typeof SessionAnswer>;

export const NewToken = z.strictObject({ name: z.string().trim().min(1).max(100) }).meta({ id: 'NewToken' });
export const TokenMade = z
  .object({ id: z.string(), token: z.string().meta({ description: 'Shown this once' }) })
  .meta({ id: 'TokenMade' });
export const TokenList = z
  .object({
    tokens: z.array(
      z.object({ id: z.string(), name: z.string(), createdAt: z.string(), lastUsedAt: z.string().nullable() }),
    ),
  })
  .meta({ id: 'TokenList' });
export type TokenMade = z.infer<typeof TokenMade>;
export type TokenList = z.infer<typeof TokenList>;
