import { createHash, randomBytes } from 'node:crypto';

/** A new secret of 256 random bits, safe in a path, and the hash under which it is stored. */
export function newToken(): { token: string; hash: string } {
  const token = randomBytes(32).toString('base64url');
  return { token, hash: hashToken(token) };
}

/**
 * SHA-256 of a token, hex. A plain hash is enough: there is nothing to guess in 256 random bits, and comparing hashes
 * in an index gives no timing to learn a token from.
 */
export function hashToken(token: string): string {
  return createHash('sha256').update(token).digest('hex');
}
