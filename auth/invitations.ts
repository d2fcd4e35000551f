import { createHash, randomBytes } from 'node:crypto';

/** An invitation is open for a week, ms. */
export const INVITATION_MS = 7 * 24 * 3600 * 1000;

/** A new invitation: its text goes into the link, its hash into the database. */
export function makeInvitation(now: Date): { text: string; hash: Buffer; expiresAt: Date } {
  const text = randomBytes(32).toString('base64url');
  return { text, hash: hashInvitation(text), expiresAt: new Date(now.getTime() + INVITATION_MS) };
}

export const hashInvitation = (text: string): Buffer => createHash('sha256').update(text).digest();

/** Address of the page that an invitation opens. */
export const invitationPath = (text: string): string => `/invitation/${text}`;
