import { createHash, randomBytes } from 'node:crypto';

/** The secret of a link that opens an account: 256 random bits. Its text goes into the link, its hash into the database. */
export function makeLinkSecret(): { text: string; hash: Buffer } {
  const text = randomBytes(32).toString('base64url');
  return { text, hash: hashLinkSecret(text) };
}

export const hashLinkSecret = (text: string): Buffer => createHash('sha256').update(text).digest();

/** Address of the page that an invitation opens. */
export const invitationPath = (text: string): string => `/invitation/${text}`;

/** Address of the page on which a new password is chosen. */
export const newPasswordPath = (text: string): string => `/new-password/${text}`;

/** A link for a new password is open for an hour after it was sent, ms. */
export const NEW_PASSWORD_MS = 3600 * 1000;
