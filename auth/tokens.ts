import { createHash, randomBytes } from 'node:crypto';

/** A token starts with this, so that people and scanners of leaked secrets know it. */
const PREFIX = 'bdl_';
const SECRET_BYTES = 32;
const HINT_LENGTH = PREFIX.length + 6;

/** A new API token: 256 random bits. Only its hash and its first letters are kept. */
export function makeToken(): { token: string; tokenHash: Buffer; hint: string } {
  const token = PREFIX + randomBytes(SECRET_BYTES).toString('base64url');
  return { token, tokenHash: hashToken(token), hint: token.slice(0, HINT_LENGTH) };
}

/** SHA-256; a slow hash would add nothing to 256 random bits. */
export function hashToken(token: string): Buffer {
  return createHash('sha256').update(token).digest();
}

/** The token of an `Authorization` header (RFC 6750), or null. */
export function bearerToken(header: string | null): string | null {
  const match = /^bearer +([A-Za-z0-9._~+/-]+=*) *$/i.exec(header ?? '');
  return match ? match[1] : null;
}
