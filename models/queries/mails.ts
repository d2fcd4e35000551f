import type { Transaction } from 'sequelize';
import type { z } from 'zod';
import { notFound } from '@/lib/errors';
import { newId } from '@/lib/ids';
import type { MailKind, MailOrder, MailState } from '@/lib/mail/mail-kinds';
import type { mailListQuery } from '@/lib/schemas/list-query';
import type { ListView, PersonView } from '@/lib/views/common';
import type { MailItemView, MailView } from '@/lib/views/mail-view';
import { containing, listPage } from './list-page';
import { iso } from './person';
import { execute, selectRow } from './select';

export interface NewMail {
  labId: string;
  userId: string;
  order: MailOrder;
  personal: boolean;
}

/** Writes down that a mail is to be sent. @returns its id */
export async function addMail(
  { labId, userId, order, personal }: NewMail,
  transaction: Transaction,
): Promise<string> {
  const id = newId();
  const { kind, ...facts } = order;
  await execute(
    `INSERT INTO mails (id, lab_id, user_id, kind, facts, personal, state)
     VALUES ($1, $2, $3, $4, $5, $6, 'waiting')`,
    [id, labId, userId, kind, JSON.stringify(facts), personal],
    transaction,
  );
  return id;
}

/** A mail that waits, with what is known of its recipient at this moment. */
export interface WaitingMail {
  id: string;
  labId: string;
  labName: string;
  userId: string;
  name: string;
  email: string;
  order: MailOrder;
  member: boolean;
  disabled: boolean;
  hasPassword: boolean;
  noticesOff: string[];
  /** Until when the invitation is open. */
  invitedUntil: Date | null;
}

/** @returns null for a mail that was dealt with already */
export async function readWaitingMail(labId: string, mailId: string): Promise<WaitingMail | null> {
  type Row = Omit<WaitingMail, 'order'> & { kind: string; facts: object };
  const row = await selectRow<Row>(
    `SELECT x.id, x.lab_id AS "labId", l.name AS "labName", u.id AS "userId", u.name, u.email, x.kind, x.facts,
       m.id IS NOT NULL AS member, u.disabled_at IS NOT NULL AS disabled, u.password_hash IS NOT NULL AS "hasPassword",
       coalesce(m.notices_off, '{}') AS "noticesOff", u.invitation_expires_at AS "invitedUntil"
     FROM mails x JOIN labs l ON l.id = x.lab_id JOIN users u ON u.id = x.user_id
       LEFT JOIN memberships m ON m.user_id = x.user_id AND m.lab_id = x.lab_id
     WHERE x.lab_id = $1 AND x.id = $2 AND x.state = 'waiting'`,
    [labId, mailId],
  );
  if (!row) return null;
  const { kind, facts, ...rest } = row;
  return { ...rest, order: { ...facts, kind } as MailOrder };
}

export interface MailEnd {
  state: Exclude<MailState, 'waiting' | 'failed'>;
  recipient?: string;
  subject?: string;
  /** Only of mail that stays here. */
  text?: string;
  html?: string;
}

/** A mail has left, or needs not leave any more. */
export async function endMail(id: string, end: MailEnd, transaction: Transaction): Promise<void> {
  await execute(
    `UPDATE mails SET state = $2, recipient = $3, subject = $4, body_text = $5, body_html = $6, sent_at = now(),
       updated_at = now() WHERE id = $1`,
    [id, end.state, end.recipient ?? null, end.subject ?? null, end.text ?? null, end.html ?? null],
    transaction,
  );
}

/** Nobody tries to send it any more; or, once its work is asked for again, somebody does. */
export async function setMailState(
  id: string,
  state: 'waiting' | 'failed',
  transaction: Transaction,
): Promise<void> {
  await execute('UPDATE mails SET state = $2, updated_at = now() WHERE id = $1', [id, state], transaction);
}

/**
 * In which laboratory's name a mail about an account goes out: its only one, or the first of several, to which it
 * is then not shown. Null for an account that can do nothing anywhere.
 */
export async function mailPlaceOf(
  userId: string,
  transaction?: Transaction,
): Promise<{ labId: string; personal: boolean } | null> {
  const row = await selectRow<{ labId: string | null; labs: number }>(
    `SELECT (array_agg(m.lab_id ORDER BY m.created_at, m.lab_id))[1] AS "labId", count(*)::int AS labs
     FROM memberships m JOIN users u ON u.id = m.user_id
     WHERE m.user_id = $1 AND u.disabled_at IS NULL`,
    [userId],
    transaction,
  );
  return row?.labId ? { labId: row.labId, personal: row.labs > 1 } : null;
}

interface Row {
  id: string;
  kind: MailKind;
  state: MailState;
  person: PersonView & { email: string };
  recipient: string | null;
  subject: string | null;
  body_text: string | null;
  body_html: string | null;
  hidden: boolean;
  delay: { tries: number; detail: string; nextAt: string } | null;
  created_at: Date;
  sent_at: Date | null;
}

const SELECT = `x.id, x.kind, x.state, x.recipient, x.subject, x.created_at, x.sent_at,
  json_build_object('id', u.id, 'name', u.name, 'email', u.email) AS person,
  (SELECT json_build_object('tries', j.attempt, 'detail', j.error_detail, 'nextAt',
     to_char(j.not_before AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"'))
   FROM job_runs j WHERE j.subject_id = x.id AND j.kind = 'send-mail' AND j.error_detail IS NOT NULL
     AND x.state IN ('waiting', 'failed') ORDER BY j.created_at DESC LIMIT 1) AS delay`;
const FROM = 'mails x JOIN users u ON u.id = x.user_id';

const itemOf = (row: Row): MailItemView => ({
  id: row.id,
  kind: row.kind,
  state: row.state,
  person: row.person,
  recipient: row.recipient,
  subject: row.subject,
  trouble: row.delay && {
    tries: row.delay.tries,
    detail: row.delay.detail,
    nextAt: row.state === 'waiting' ? row.delay.nextAt : null,
  },
  createdAt: row.created_at.toISOString(),
  sentAt: iso(row.sent_at),
});

/** Mail of a laboratory, newest first, without what concerns an account of several laboratories. */
export async function listMails(
  labId: string,
  query: z.output<typeof mailListQuery>,
): Promise<ListView<MailItemView>> {
  const bind: unknown[] = [labId];
  const where = ['x.lab_id = $1', 'NOT x.personal'];
  if (query.state) where.push(`x.state = $${bind.push(query.state)}`);
  if (query.q) {
    const at = bind.push(containing(query.q));
    where.push(`(u.name ILIKE $${at} OR u.email ILIKE $${at} OR x.subject ILIKE $${at})`);
  }
  const page = await listPage<Row>(
    {
      select: SELECT,
      from: FROM,
      where,
      bind,
      idColumn: 'x.id',
      sorts: { createdAt: { by: 'x.created_at', type: 'timestamptz' } },
    },
    query,
  );
  return { items: page.rows.map(itemOf), nextCursor: page.nextCursor };
}

/** With its words, where they were kept. @throws LabError NOT_FOUND */
export async function getMail(labId: string, id: string): Promise<MailView> {
  const row = await selectRow<Row>(
    `SELECT ${SELECT}, x.body_text, x.body_html,
       -- A link opens the account in every laboratory that it has joined since.
       x.kind IN ('invitation', 'password-reset') AND EXISTS (
         SELECT FROM memberships o WHERE o.user_id = x.user_id AND o.lab_id <> x.lab_id) AS hidden
     FROM ${FROM} WHERE x.lab_id = $1 AND x.id = $2 AND NOT x.personal`,
    [labId, id],
  );
  if (!row) throw notFound('mail');
  return {
    ...itemOf(row),
    text: row.hidden ? null : row.body_text,
    html: row.hidden ? null : row.body_html,
  };
}

/** Forgets mail that nobody looks for any more, and links that have ended. */
export async function dropOldMails(olderThanDays: number): Promise<void> {
  await execute(
    `DELETE FROM mails WHERE state <> 'waiting' AND created_at < now() - make_interval(days => $1)`,
    [olderThanDays],
  );
  await execute(`DELETE FROM account_links WHERE expires_at < now() - interval '1 day'`);
}
