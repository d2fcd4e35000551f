import type { z } from 'zod';
import type { auditListQuery } from '@/lib/schemas/list-query';
import type { ListView, PersonView } from '@/lib/views/common';
import type { AuditView } from '@/lib/views/lab-view';
import { listPage } from './list-page';
import { personJson } from './person';

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
  ${named('token', 's.name FROM api_tokens s')}
  ${named('analysis', '(SELECT r.name FROM recordings r WHERE r.id = s.recording_id) FROM analyses s')}
  WHEN a.subject_kind = 'membership' THEN coalesce(
    (SELECT p.name FROM memberships s JOIN users p ON p.id = s.user_id
     WHERE s.id::text = a.subject_id AND s.lab_id = a.lab_id), a.detail->>'name', a.detail->>'email')
  END`;

/**
 * What was done in a laboratory, newest first.
 * @param ownerId only what this person did; null for everybody's
 */
export async function listAudit(
  labId: string,
  ownerId: string | null,
  query: z.output<typeof auditListQuery>,
): Promise<ListView<AuditView>> {
  const bind: unknown[] = [labId];
  const where = ['a.lab_id = $1'];
  if (ownerId) where.push(`a.user_id = $${bind.push(ownerId)}`);
  if (query.person) where.push(`a.user_id = $${bind.push(query.person)}`);
  if (query.action) {
    const at = bind.push(query.action);
    where.push(`(a.action = $${at} OR split_part(a.action, '.', 1) = $${at})`);
  }
  const page = await listPage<Row>(
    {
      select: `a.id, a.action, a.subject_kind, a.subject_id, ${SUBJECT_NAME} AS subject_name, a.detail,
        a.created_at, ${personJson('u')} AS person`,
      from: 'audit_entries a LEFT JOIN users u ON u.id = a.user_id',
      where,
      bind,
      idColumn: 'a.id',
      sorts: { createdAt: { by: 'a.created_at', type: 'timestamptz' } },
    },
    query,
  );
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

const viewOf = (row: Row): AuditView => ({
  id: row.id,
  createdAt: row.created_at.toISOString(),
  person: row.person,
  action: row.action,
  subject: { kind: row.subject_kind, id: row.subject_id, name: row.subject_name },
  detail: row.detail,
});
