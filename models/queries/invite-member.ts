import type { Transaction } from 'sequelize';
import { LabError } from '@/lib/errors';
import { newId } from '@/lib/ids';
import type { MemberCreate } from '@/lib/schemas/lab';
import type { MemberView } from '@/lib/views/lab-view';
import { getSequelize } from '../database';
import { closeLinks } from './account-links';
import { getMember } from './people';
import { execute, selectRow } from './select';
import { writeAudit } from './write-audit';

/** What a link's secret leaves in the database. */
export interface OpenInvitation {
  hash: Buffer;
  expiresAt: Date;
}

interface Account {
  id: string;
  name: string;
  has_password: boolean;
  disabled: boolean;
  /** Member of this laboratory, of any other. */
  here: boolean;
  elsewhere: boolean;
}

/** Told in the transaction that made somebody a member or invited them again. */
export type InvitationTeller = (
  account: { userId: string; opens: boolean },
  transaction: Transaction,
) => Promise<void>;

/**
 * Makes a person a member, and their account where there is none. The invitation opens an account that has no
 * password; never one that another laboratory has invited, which its link would hand over.
 * @returns the member, and whether the invitation opens the account
 * @throws LabError STATE for somebody who is a member already, or whose account is closed.
 */
export async function addMember(
  labId: string,
  { name, email, roles }: MemberCreate,
  invitation: OpenInvitation,
  byUserId: string,
  tell: InvitationTeller,
): Promise<{ member: MemberView; invited: boolean }> {
  const id = newId();
  const invited = await getSequelize().transaction(async (transaction) => {
    await execute(
      'INSERT INTO users (id, email, name) VALUES ($1, $2, $3) ON CONFLICT (lower(email)) DO NOTHING',
      [newId(), email, name],
      transaction,
    );
    const account = await lockAccount('lower(u.email) = lower($2)', [labId, email], transaction);
    if (!account) throw new Error('An account was neither found nor made.');
    if (account.here) throw new LabError('STATE', `${email} is a member of this laboratory already.`);
    if (account.disabled) throw new LabError('STATE', `The account of ${email} was closed.`);
    await execute(
      'INSERT INTO memberships (id, lab_id, user_id, roles) VALUES ($1, $2, $3, $4)',
      [id, labId, account.id, roles],
      transaction,
    );
    const opens = !account.has_password && !account.elsewhere;
    if (opens) await openInvitation(account.id, invitation, transaction);
    const what = { action: 'member.invited', subjectKind: 'membership', subjectId: id };
    await writeAudit(
      { labId, userId: byUserId, ...what, detail: { name: account.name, email, roles } },
      transaction,
    );
    // Another laboratory's invitation opens the account: ours has nothing to tell that it doesn't.
    if (opens || account.has_password) await tell({ userId: account.id, opens }, transaction);
    return opens;
  });
  return { member: await getMember(labId, id), invited };
}

/**
 * Puts a new invitation in place of the one before.
 * @throws LabError NOT_FOUND, STATE where the person has a password or was invited by another laboratory too.
 */
export async function renewInvitation(
  labId: string,
  memberId: string,
  invitation: OpenInvitation,
  byUserId: string,
  tell: InvitationTeller,
): Promise<void> {
  const { person } = await getMember(labId, memberId);
  await getSequelize().transaction(async (transaction) => {
    const account = await lockAccount('u.id = $2', [labId, person.id], transaction);
    if (!account || account.has_password) {
      throw new LabError('STATE', `${person.name} has chosen a password already and can sign in.`);
    }
    if (account.elsewhere) {
      throw new LabError('STATE', `${person.name} was invited by another laboratory too: its link is good.`);
    }
    await openInvitation(account.id, invitation, transaction);
    const what = { action: 'member.invited-again', subjectKind: 'membership', subjectId: memberId };
    await writeAudit(
      { labId, userId: byUserId, ...what, detail: { name: person.name, email: person.email } },
      transaction,
    );
    await tell({ userId: person.id, opens: true }, transaction);
  });
}

/** @param bind the laboratory's id, then what `where` asks for */
function lockAccount(where: string, bind: [string, string], transaction: Transaction) {
  return selectRow<Account>(
    `SELECT u.id, u.name, u.password_hash IS NOT NULL AS has_password, u.disabled_at IS NOT NULL AS disabled,
       EXISTS (SELECT FROM memberships m WHERE m.user_id = u.id AND m.lab_id = $1) AS here,
       EXISTS (SELECT FROM memberships m WHERE m.user_id = u.id AND m.lab_id <> $1) AS elsewhere
     FROM users u WHERE ${where} FOR UPDATE OF u`,
    bind,
    transaction,
  );
}

async function openInvitation(
  userId: string,
  { hash, expiresAt }: OpenInvitation,
  transaction: Transaction,
): Promise<void> {
  await closeLinks(userId, 'invitation', transaction);
  await execute(
    'UPDATE users SET invitation_hash = $2, invitation_expires_at = $3, updated_at = now() WHERE id = $1',
    [userId, hash, expiresAt],
    transaction,
  );
}
