import type { Transaction } from 'sequelize';
import { getSequelize } from '../database';
import { storePassword } from './account-links';
import { selectRow } from './select';

/** The stored hash of a person's password; null before the first. */
export async function passwordHashOf(userId: string): Promise<string | null> {
  const row = await selectRow<{ hash: string | null }>(
    'SELECT password_hash AS hash FROM users WHERE id = $1',
    [userId],
  );
  return row?.hash ?? null;
}

/** A person's own change of their password. @param then in the same transaction */
export async function setPassword(
  person: { userId: string; labId: string },
  passwordHash: string,
  then: (transaction: Transaction) => Promise<void>,
): Promise<void> {
  await getSequelize().transaction(async (transaction) => {
    await storePassword(person, passwordHash, transaction);
    await then(transaction);
  });
}

/** An account that can have a new password: in use, with a password and a laboratory. */
export async function findResettable(email: string): Promise<{ userId: string } | null> {
  return selectRow<{ userId: string }>(
    `SELECT u.id AS "userId" FROM users u WHERE lower(u.email) = lower($1) AND u.disabled_at IS NULL
       AND u.password_hash IS NOT NULL AND EXISTS (SELECT FROM memberships m WHERE m.user_id = u.id)`,
    [email],
  );
}
