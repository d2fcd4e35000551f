import { getSequelize } from '../database';
import { execute, selectRow } from './select';
import { writeAudit } from './write-audit';

/** The stored hash of a person's password; null before the first. */
export async function passwordHashOf(userId: string): Promise<string | null> {
  const row = await selectRow<{ hash: string | null }>(
    'SELECT password_hash AS hash FROM users WHERE id = $1',
    [userId],
  );
  return row?.hash ?? null;
}

/** Stores a new password and ends every session of the person; an open invitation is used up. */
export async function setPassword(
  person: { userId: string; labId: string | null },
  passwordHash: string,
): Promise<void> {
  await getSequelize().transaction(async (transaction) => {
    await execute(
      `UPDATE users SET password_hash = $2, session_version = session_version + 1, invitation_hash = NULL,
         invitation_expires_at = NULL, updated_at = now() WHERE id = $1`,
      [person.userId, passwordHash],
      transaction,
    );
    const entry = { action: 'user.password-set', subjectKind: 'user', subjectId: person.userId };
    await writeAudit({ labId: person.labId, userId: person.userId, ...entry }, transaction);
  });
}

export interface Invited {
  userId: string;
  name: string;
  email: string;
}

/** The person whose invitation has this hash and is still open; null for any other. */
export async function findInvited(invitationHash: Buffer): Promise<Invited | null> {
  return selectRow<Invited>(
    `SELECT id AS "userId", name, email FROM users
     WHERE invitation_hash = $1 AND invitation_expires_at > now() AND disabled_at IS NULL`,
    [invitationHash],
  );
}
