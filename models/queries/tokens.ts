import type { z } from 'zod';
import type { Scope } from '@/lib/access';
import { LabError, notFound } from '@/lib/errors';
import { newId } from '@/lib/ids';
import type { tokenListQuery } from '@/lib/schemas/list-query';
import type { ListView, PersonView } from '@/lib/views/common';
import type { TokenView } from '@/lib/views/lab-view';
import { models } from '..';
import { listPage } from './list-page';
import { iso } from './person';
import { execute, selectRow } from './select';

/** More than anyone needs, and few enough to look through. */
const TOKENS_MOST = 50;

interface Row {
  id: string;
  name: string;
  owner: PersonView;
  hint: string;
  scopes: Scope[];
  created_at: Date;
  last_used_at: Date | null;
  revoked_at: Date | null;
}

const SELECT = `t.id, t.name, t.hint, t.scopes, t.created_at, t.last_used_at, t.revoked_at,
  json_build_object('id', u.id, 'name', u.name) AS owner`;
const FROM = 'api_tokens t JOIN users u ON u.id = t.user_id';

const viewOf = (row: Row): TokenView => ({
  id: row.id,
  name: row.name,
  owner: row.owner,
  hint: row.hint,
  scopes: row.scopes,
  createdAt: row.created_at.toISOString(),
  lastUsedAt: iso(row.last_used_at),
  revokedAt: iso(row.revoked_at),
});

/** @param ownerId only this person's tokens; null for everybody's */
export async function listTokens(
  labId: string,
  ownerId: string | null,
  query: z.output<typeof tokenListQuery>,
): Promise<ListView<TokenView>> {
  const bind: unknown[] = [labId];
  const where = ['t.lab_id = $1'];
  if (ownerId) where.push(`t.user_id = $${bind.push(ownerId)}`);
  const page = await listPage<Row>(
    {
      select: SELECT,
      from: FROM,
      where,
      bind,
      idColumn: 't.id',
      sorts: {
        createdAt: { by: 't.created_at', type: 'timestamptz' },
        name: { by: 'lower(t.name)', type: 'text' },
        lastUsedAt: { by: `coalesce(t.last_used_at, '-infinity'::timestamptz)`, type: 'timestamptz' },
      },
    },
    query,
  );
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

/** @throws LabError NOT_FOUND */
export async function getToken(labId: string, id: string): Promise<TokenView> {
  const row = await selectRow<Row>(`SELECT ${SELECT} FROM ${FROM} WHERE t.lab_id = $1 AND t.id = $2`, [
    labId,
    id,
  ]);
  if (!row) throw notFound('token');
  return viewOf(row);
}

export interface NewToken {
  labId: string;
  userId: string;
  name: string;
  scopes: Scope[];
  tokenHash: Buffer;
  hint: string;
}

/** Keeps a token's hash. @throws LabError STATE above the number that one person may have. */
export async function saveToken(token: NewToken): Promise<TokenView> {
  const row = await selectRow<{ live: number }>(
    'SELECT count(*)::int AS live FROM api_tokens WHERE lab_id = $1 AND user_id = $2 AND revoked_at IS NULL',
    [token.labId, token.userId],
  );
  if (row && row.live >= TOKENS_MOST) {
    throw new LabError('STATE', `You have ${TOKENS_MOST} tokens. Revoke those that are not used any more.`);
  }
  const { id } = await models().ApiToken.create({ id: newId(), ...token });
  return getToken(token.labId, id);
}

/** Ends a token for good; doing it twice changes nothing. */
export async function revokeToken(labId: string, id: string): Promise<void> {
  await execute(
    'UPDATE api_tokens SET revoked_at = coalesce(revoked_at, now()) WHERE lab_id = $1 AND id = $2',
    [labId, id],
  );
}
