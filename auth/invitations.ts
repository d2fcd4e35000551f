import { makeLinkSecret } from '@/lib/link-secret';

/** An invitation is open for a week, ms. */
export const INVITATION_MS = 7 * 24 * 3600 * 1000;

/** A new invitation: its text goes into the link, its hash into the database. */
export function makeInvitation(now: Date): { text: string; hash: Buffer; expiresAt: Date } {
  return { ...makeLinkSecret(), expiresAt: new Date(now.getTime() + INVITATION_MS) };
}
