import { describe, expect, it } from 'vitest';
import { hashOf, newId, newSecret } from '../../../../server/accounts/ids.ts';
import { hashPassword, passwordFits } from '../../../../server/accounts/passwords.ts';

describe('passwords', () => {
  it('when one is hashed, then it is argon2id with 19 MiB, two passes and one lane, and salted', async () => {
    const [first, second] = await Promise.all([
      hashPassword('an invented password'),
      hashPassword('an invented password'),
    ]);
    expect(first).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
    expect(second).not.toBe(first);
  });

  it('when one is held against a hash, then only the same one fits', async () => {
    const hash = await hashPassword('an invented password');
    expect(await passwordFits(hash, 'an invented password')).toBe(true);
    expect(await passwordFits(hash, 'an invented passwore')).toBe(false);
    expect(await passwordFits(hash, '')).toBe(false);
  });

  it('when there is no hash, then nothing fits, not even what the stand-in was made of', async () => {
    expect(await passwordFits(null, 'an invented password')).toBe(false);
    expect(await passwordFits(null, 'nobody has this password')).toBe(false);
  });
});

describe('secrets and ids', () => {
  it('when they are made, then they are long, of their alphabet and never the same', () => {
    const secrets = Array.from({ length: 200 }, newSecret);
    expect(new Set(secrets).size).toBe(200);
    for (const secret of secrets) expect(Buffer.from(secret, 'base64url')).toHaveLength(32);
    const ids = Array.from({ length: 200 }, () => newId());
    expect(new Set(ids).size).toBe(200);
    for (const id of ids) expect(id).toMatch(/^[a-z0-9]{16}$/);
  });

  it('when a secret is kept, then as its SHA-256', () => {
    // FIPS 180-2, appendix B.1: the digest of “abc”.
    expect(hashOf('abc').toString('hex')).toBe('ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad');
  });
});
