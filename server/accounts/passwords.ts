import { hash, verify } from '@node-rs/argon2';

/** argon2id with 19 MiB, two passes, one lane: the floor of the OWASP recommendation. */
const COST = { memoryCost: 19 * 1024, timeCost: 2, parallelism: 1 } as const;

export function hashPassword(password: string): Promise<string> {
  return hash(password, COST);
}

let stranger: Promise<string> | undefined;

/**
 * Whether the password belongs to the hash. Without a hash (nobody of that address, or no password
 * yet) it does the same work and says no, so that time tells nothing.
 */
export async function passwordFits(passwordHash: string | null, password: string): Promise<boolean> {
  stranger ??= hashPassword('nobody has this password');
  const fits = await verify(passwordHash ?? (await stranger), password);
  return fits && passwordHash !== null;
}
