import type { Transaction } from 'sequelize';
import { getSequelize } from '../database';
import { execute, selectRow } from './select';
import { writeAudit } from './write-audit';

export type LinkPurpose = 'invitation' | 'password-reset';

/** Puts a link that goes out by mail in place of the one before it for the same purpose. */
export async function replaceLink(
  userId: string,
  purpose: LinkPurpose,
  { hash, expiresAt }: { hash: Buffer; expiresAt: Date },
): Promise<void> {
  await getSequelize().transaction(async (transaction) => {
    await closeLinks(userId, purpose, transaction);
    await execute(
      'INSERT INTO account_links (hash, user_id, purpose, expires_at) VALUES ($1, $2, $3, $4)',
      [hash, userId, purpose, expiresAt],
      transaction,
    );
  });
}

/** Mailed links of this purpose open nothing any more. */
export const closeLinks = (userId: string, purpose: LinkPurpose, transaction: Transaction) =>
  execute('DELETE FROM account_links WHERE user_id = $1 AND purpose = $2', [userId, purpose], transaction);

export interface LinkOwner {
  userId: string;
  name: string;
  email: string;
}

// An invitation's link is the one that was shown or one that was mailed; both end with the invitation.
const OPEN: Record<LinkPurpose, string> = {
  invitation: `u.password_hash IS NULL AND u.invitation_expires_at > now() AND (u.invitation_hash = $1 OR EXISTS (
    SELECT FROM account_links k WHERE k.hash = $1 AND k.user_id = u.id AND k.purpose = 'invitation'))`,
  'password-reset': `u.password_hash IS NOT NULL AND EXISTS (
    SELECT FROM account_links k WHERE k.hash = $1 AND k.user_id = u.id AND k.purpose = 'password-reset'
      AND k.expires_at > now())`,
};

/** Whose account a link opens at this moment; null for a link that was used, has ended or never was. */
export function findLinkOwner(
  hash: Buffer,
  purpose: LinkPurpose,
  transaction?: Transaction,
): Promise<LinkOwner | null> {
  const lock = transaction ? 'FOR UPDATE OF u' : '';
  return selectRow<LinkOwner>(
    `SELECT u.id AS "userId", u.name, u.email FROM users u
     WHERE u.disabled_at IS NULL AND ${OPEN[purpose]} ${lock}`,
    [hash],
    transaction,
  );
}

/**
 * Uses a link up: the account gets its password, every session of it ends and no link to it is good any more. Of two
 * that use the same link at once, one comes too late.
 * @param then in the same transaction, with the account's id
 * @returns false for a link that is not open (any more)
 */
export async function passwordByLink(
  hash: Buffer,
  purpose: LinkPurpose,
  passwordHash: string,
  then: (userId: string, transaction: Transaction) => Promise<void>,
): Promise<boolean> {
  return getSequelize().transaction(async (transaction) => {
    const owner = await findLinkOwner(hash, purpose, transaction);
    if (!owner || !(await isStillOpen(hash, purpose, transaction))) return false;
    await storePassword({ userId: owner.userId, labId: null }, passwordHash, transaction);
    await then(owner.userId, transaction);
    return true;
  });
}

/** Asked again with the account locked: whoever used the link meanwhile has taken it away. An invitation shows it in the account itself. */
async function isStillOpen(hash: Buffer, purpose: LinkPurpose, transaction: Transaction): Promise<boolean> {
  if (purpose === 'invitation') return true;
  const taken = await selectRow(
    'DELETE FROM account_links WHERE hash = $1 RETURNING user_id',
    [hash],
    transaction,
  );
  return taken !== null;
}

/** Stores a new password, ends every session of the account and uses up all links to it. */
export async function storePassword(
  person: { userId: string; labId: string | null },
  passwordHash: string,
  transaction: Transaction,
): Promise<void> {
  await execute(
    `UPDATE users SET password_hash = $2, session_version = session_version + 1, invitation_hash = NULL,
       invitation_expires_at = NULL, updated_at = now() WHERE id = $1`,
    [person.userId, passwordHash],
    transaction,
  );
  await execute('DELETE FROM account_links WHERE user_id = $1', [person.userId], transaction);
  const entry = { action: 'user.password-set', subjectKind: 'user', subjectId: person.userId };
  await writeAudit({ labId: person.labId, userId: person.userId, ...entry }, transaction);
}

/** Ends every session of an account. */
export const endSessions = (userId: string, transaction: Transaction) =>
  execute(
    'UPDATE users SET session_version = session_version + 1, updated_at = now() WHERE id = $1',
    [userId],
    transaction,
  );
