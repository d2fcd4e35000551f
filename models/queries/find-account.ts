import type { Role, Scope } from '@/lib/access';
import { execute, selectRow, selectRows } from './select';

export interface LabOfPerson {
  id: string;
  name: string;
  slug: string;
  roles: Role[];
}

export interface Account {
  userId: string;
  name: string;
  email: string;
  sessionVersion: number;
  labs: LabOfPerson[];
}

interface Row {
  id: string;
  name: string;
  email: string;
  session_version: number;
  lab_id: string | null;
  lab_name: string;
  slug: string;
  roles: Role[];
}

/** An account that may be used, with all its memberships by name of the laboratory; null otherwise. */
export async function findAccount(userId: string): Promise<Account | null> {
  const rows = await selectRows<Row>(
    `SELECT u.id, u.name, u.email, u.session_version, l.id AS lab_id, l.name AS lab_name, l.slug, m.roles
     FROM users u
     LEFT JOIN memberships m ON m.user_id = u.id
     LEFT JOIN labs l ON l.id = m.lab_id
     WHERE u.id = $1 AND u.disabled_at IS NULL
     ORDER BY l.name, l.id`,
    [userId],
  );
  if (rows.length === 0) return null;
  const [first] = rows;
  return {
    userId: first.id,
    name: first.name,
    email: first.email,
    sessionVersion: first.session_version,
    labs: rows.flatMap((row) =>
      row.lab_id ? [{ id: row.lab_id, name: row.lab_name, slug: row.slug, roles: row.roles }] : [],
    ),
  };
}

export interface TokenOwner {
  tokenId: string;
  userId: string;
  labId: string;
  scopes: Scope[];
}

/** Whose a token is, by the SHA-256 of it; null when unknown or revoked. */
export async function findTokenOwner(tokenHash: Buffer): Promise<TokenOwner | null> {
  return selectRow<TokenOwner>(
    `SELECT id AS "tokenId", user_id AS "userId", lab_id AS "labId", scopes
     FROM api_tokens WHERE token_hash = $1 AND revoked_at IS NULL`,
    [tokenHash],
  );
}

/** Notes that a token was used; once a minute is enough for people to see which tokens live. */
export async function touchToken(tokenId: string): Promise<void> {
  await execute(
    `UPDATE api_tokens SET last_used_at = now()
     WHERE id = $1 AND (last_used_at IS NULL OR last_used_at < now() - interval '1 minute')`,
    [tokenId],
  );
}
