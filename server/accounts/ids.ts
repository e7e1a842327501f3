import { createHash, randomBytes, randomInt } from 'node:crypto';

const ALPHABET = 'abcdefghijklmnopqrstuvwxyz0123456789';

/** A new opaque id of [a-z0-9]; 16 characters hold 82 bits. */
export function newId(length = 16): string {
  return Array.from({ length }, () => ALPHABET[randomInt(ALPHABET.length)]).join('');
}

/** A new secret of 256 bits for a token or a link. */
export function newSecret(): string {
  return randomBytes(32).toString('base64url');
}

/** How such a secret is kept: long random secrets need no slow hash. */
export function hashOf(secret: string): Buffer {
  return createHash('sha256').update(secret).digest();
}
