import type { z } from 'zod';
import type { Role } from '@/lib/access';
import { LabError, notFound } from '@/lib/errors';
import type { memberListQuery } from '@/lib/schemas/list-query';
import type { ListView, PersonView } from '@/lib/views/common';
import type { MemberView } from '@/lib/views/lab-view';
import { getSequelize } from '../database';
import { changeRow, type Change } from './change-row';
import { containing, listPage } from './list-page';
import { iso, itemOf, type ItemRow } from './person';
import { execute, selectRow } from './select';
import { writeAudit } from './write-audit';

interface Row extends ItemRow {
  person: PersonView & { email: string };
  roles: Role[];
  invited_until: Date | null;
  invitation_mail: MemberView['invitationMail'];
}

const SELECT = `m.id, m.roles, m.revision, m.created_at, m.updated_at,
  json_build_object('id', u.id, 'name', u.name, 'email', u.email) AS person,
  CASE WHEN u.password_hash IS NULL THEN coalesce(u.invitation_expires_at, u.created_at) END AS invited_until,
  CASE WHEN u.password_hash IS NULL THEN (
    SELECT json_build_object('state', x.state, 'delayed', x.state = 'waiting' AND EXISTS (
      SELECT FROM job_runs j WHERE j.subject_id = x.id AND j.kind = 'send-mail' AND j.error_detail IS NOT NULL))
    FROM mails x WHERE x.user_id = u.id AND x.lab_id = m.lab_id AND x.kind = 'invitation'
    ORDER BY x.created_at DESC LIMIT 1) END AS invitation_mail`;
const FROM = 'memberships m JOIN users u ON u.id = m.user_id';

const viewOf = (row: Row): MemberView => ({
  ...itemOf(row),
  person: row.person,
  roles: row.roles,
  invitedUntil: iso(row.invited_until),
  invitationMail: row.invitation_mail,
});

export async function listMembers(
  labId: string,
  query: z.output<typeof memberListQuery>,
): Promise<ListView<MemberView>> {
  const bind: unknown[] = [labId];
  const where = ['m.lab_id = $1'];
  if (query.q)
    where.push(`(u.name ILIKE $${bind.push(containing(query.q))} OR u.email ILIKE $${bind.length})`);
  const page = await listPage<Row>(
    {
      select: SELECT,
      from: FROM,
      where,
      bind,
      idColumn: 'm.id',
      sorts: {
        name: { by: 'lower(u.name)', type: 'text' },
        createdAt: { by: 'm.created_at', type: 'timestamptz' },
      },
    },
    query,
  );
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

/** @throws LabError NOT_FOUND */
export async function getMember(labId: string, id: string): Promise<MemberView> {
  const row = await selectRow<Row>(`SELECT ${SELECT} FROM ${FROM} WHERE m.lab_id = $1 AND m.id = $2`, [
    labId,
    id,
  ]);
  if (!row) throw notFound('member');
  return viewOf(row);
}

/**
 * Gives a member other roles and ends their sessions, so that old rights end at once.
 * @throws LabError FORBIDDEN for one's own roles, STATE when no administrator would be left.
 */
export async function changeRoles(change: Change, roles: Role[], byUserId: string): Promise<MemberView> {
  await getSequelize().transaction(async (transaction) => {
    const administrators = await lockAdministrators(change.labId, transaction);
    const member = await getMember(change.labId, change.id);
    if (member.person.id === byUserId) {
      throw new LabError('FORBIDDEN', 'Nobody changes their own roles: ask another administrator.');
    }
    if (!roles.includes('lab_administrator') && administrators.every((id) => id === change.id)) {
      throw new LabError('STATE', 'The laboratory would be left without an administrator.');
    }
    await changeRow('memberships', change, { roles }, () => getMember(change.labId, change.id), transaction);
    await selectRow(
      'UPDATE users SET session_version = session_version + 1, updated_at = now() WHERE id = $1 RETURNING id',
      [member.person.id],
      transaction,
    );
    await writeAudit(
      {
        labId: change.labId,
        userId: byUserId,
        action: 'member.roles-changed',
        subjectKind: 'membership',
        subjectId: change.id,
        detail: { name: member.person.name, before: member.roles, after: roles },
      },
      transaction,
    );
  });
  return getMember(change.labId, change.id);
}

/**
 * Ends a membership: the person's sessions end and their tokens of this laboratory are revoked; what they made
 * stays, with their name. An invitation that opened this laboratory alone is closed.
 * @throws LabError FORBIDDEN for oneself, STATE when no administrator would be left.
 */
export async function removeMember(labId: string, id: string, byUserId: string): Promise<void> {
  await getSequelize().transaction(async (transaction) => {
    const administrators = await lockAdministrators(labId, transaction);
    const { person, roles } = await getMember(labId, id);
    if (person.id === byUserId) {
      throw new LabError('FORBIDDEN', 'Nobody removes themselves: ask another administrator.');
    }
    if (roles.includes('lab_administrator') && administrators.every((other) => other === id)) {
      throw new LabError('STATE', 'The laboratory would be left without an administrator.');
    }
    const both = [labId, person.id];
    await execute('DELETE FROM memberships WHERE lab_id = $1 AND user_id = $2', both, transaction);
    await execute(
      `UPDATE api_tokens SET revoked_at = now(), updated_at = now()
       WHERE lab_id = $1 AND user_id = $2 AND revoked_at IS NULL`,
      both,
      transaction,
    );
    const others = 'EXISTS (SELECT FROM memberships m WHERE m.user_id = users.id)';
    await execute(
      `UPDATE users SET session_version = session_version + 1, updated_at = now(),
         invitation_hash = CASE WHEN ${others} THEN invitation_hash END,
         invitation_expires_at = CASE WHEN ${others} THEN invitation_expires_at END
       WHERE id = $1`,
      [person.id],
      transaction,
    );
    const detail = { name: person.name, email: person.email, roles };
    const what = { action: 'member.removed', subjectKind: 'membership', subjectId: id, detail };
    await writeAudit({ labId, userId: byUserId, ...what }, transaction);
  });
}

/** Ids of the memberships with the administrator's role; two changes at once can't remove both. */
async function lockAdministrators(
  labId: string,
  transaction: Parameters<typeof writeAudit>[1],
): Promise<string[]> {
  const row = await selectRow<{ ids: string[] }>(
    `SELECT coalesce(array_agg(id), '{}') AS ids FROM (
       SELECT id FROM memberships WHERE lab_id = $1 AND 'lab_administrator' = ANY(roles) ORDER BY id FOR UPDATE) m`,
    [labId],
    transaction,
  );
  return row?.ids ?? [];
}
