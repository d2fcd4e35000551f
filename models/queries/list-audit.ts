import type { z } from 'zod';
import { AUDIT_WORDS } from '@/lib/audit-words';
import type { AuditFilters, auditListQuery } from '@/lib/schemas/list-query';
import type { ListView, PersonView } from '@/lib/views/common';
import type { AuditView } from '@/lib/views/lab-view';
import { containing, listPage } from './list-page';
import { personJson } from './person';
import { selectRows } from './select';

interface Row {
  id: string;
  action: string;
  subject_kind: string;
  subject_id: string | null;
  subject_name: string | null;
  detail: Record<string, unknown>;
  created_at: Date;
  person: PersonView | null;
}

const named = (kind: string, select: string) =>
  `WHEN a.subject_kind = '${kind}' THEN (SELECT ${select} WHERE s.id::text = a.subject_id AND s.lab_id = a.lab_id)`;

/** Name of what it was done to, as it is called now; a member that was removed is named in the entry itself. */
const SUBJECT_NAME = `CASE
  ${named('campaign', 's.name FROM campaigns s')}
  ${named('run', 's.name FROM runs s')}
  ${named('recording', 's.name FROM recordings s')}
  ${named('rehearsal', 's.name FROM rehearsals s')}
  ${named('selection', 's.name FROM saved_selections s')}
  ${named('token', 's.name FROM api_tokens s')}
  ${named('export', 's.title FROM exports s')}
  ${named('analysis', '(SELECT r.name FROM recordings r WHERE r.id = s.recording_id) FROM analyses s')}
  WHEN a.subject_kind = 'mail' THEN a.detail->>'to'
  WHEN a.subject_kind = 'membership' THEN coalesce(
    (SELECT p.name FROM memberships s JOIN users p ON p.id = s.user_id
     WHERE s.id::text = a.subject_id AND s.lab_id = a.lab_id), a.detail->>'name', a.detail->>'email')
  END`;

const FROM = 'audit_entries a LEFT JOIN users u ON u.id = a.user_id';
const SELECT = `a.id, a.action, a.subject_kind, a.subject_id, ${SUBJECT_NAME} AS subject_name, a.detail,
  a.created_at, ${personJson('u')} AS person`;

/** Belongs to no laboratory, but is told to each that the person is a member of. */
const FAILED_SIGN_IN = `(a.lab_id IS NULL AND a.action = 'sign-in.failed'
  AND EXISTS (SELECT 1 FROM memberships m WHERE m.lab_id = $1 AND m.user_id = a.user_id))`;

/** @param ownerId only what this person did; null for everybody's */
function chosen(labId: string, ownerId: string | null, filters: AuditFilters) {
  const bind: unknown[] = [labId];
  const where = [`(a.lab_id = $1 OR ${FAILED_SIGN_IN})`];
  if (ownerId) where.push(`a.user_id = $${bind.push(ownerId)}`);
  if (filters.person) where.push(`a.user_id = $${bind.push(filters.person)}`);
  if (filters.action) {
    const at = bind.push(filters.action);
    where.push(`(a.action = $${at} OR split_part(a.action, '.', 1) = $${at})`);
  }
  if (filters.from) where.push(`a.created_at >= $${bind.push(filters.from)}::date AT TIME ZONE 'UTC'`);
  if (filters.to) where.push(`a.created_at < ($${bind.push(filters.to)}::date + 1) AT TIME ZONE 'UTC'`);
  if (filters.q) {
    const [text, actions] = [bind.push(containing(filters.q)), bind.push(actionsSaid(filters.q))];
    where.push(
      `(u.name ILIKE $${text} OR u.email ILIKE $${text} OR ${SUBJECT_NAME} ILIKE $${text}
        OR a.detail::text ILIKE $${text} OR a.action = ANY($${actions}::text[]))`,
    );
  }
  return { bind, where };
}

/** Acts whose words, as people read them, hold the text. */
const actionsSaid = (text: string): string[] =>
  Object.entries(AUDIT_WORDS).flatMap(([action, words]) =>
    words.includes(text.toLowerCase()) ? [action] : [],
  );

/**
 * What was done in a laboratory, newest first.
 * @param ownerId only what this person did; null for everybody's
 */
export async function listAudit(
  labId: string,
  ownerId: string | null,
  query: z.output<typeof auditListQuery>,
): Promise<ListView<AuditView>> {
  const page = await listPage<Row>(
    {
      select: SELECT,
      from: FROM,
      ...chosen(labId, ownerId, query),
      idColumn: 'a.id',
      sorts: { createdAt: { by: 'a.created_at', type: 'timestamptz' } },
    },
    query,
  );
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

const PIECE_ROWS = 1_000;

/** The same, oldest first and piece by piece, however many they are. */
export async function* streamAudit(
  labId: string,
  ownerId: string | null,
  filters: AuditFilters,
): AsyncGenerator<AuditView> {
  let after: [string, string] | null = null;
  for (;;) {
    const { bind, where } = chosen(labId, ownerId, filters);
    if (after) where.push(`(a.created_at, a.id) > ($${bind.push(after[0])}::timestamptz, $${bind.push(after[1])}::uuid)`); // prettier-ignore
    // Times in JavaScript end at milliseconds: the key must be as fine as the column.
    const rows: (Row & { key: string })[] = await selectRows(
      `SELECT ${SELECT}, a.created_at::text AS key FROM ${FROM} WHERE ${where.join(' AND ')}
       ORDER BY a.created_at, a.id LIMIT ${PIECE_ROWS}`,
      bind,
    );
    yield* rows.map(viewOf);
    const last = rows.at(-1);
    if (!last || rows.length < PIECE_ROWS) return;
    after = [last.key, last.id];
  }
}

const viewOf = (row: Row): AuditView => ({
  id: row.id,
  createdAt: row.created_at.toISOString(),
  person: row.person,
  action: row.action,
  subject: { kind: row.subject_kind, id: row.subject_id, name: row.subject_name },
  detail: row.detail,
});
