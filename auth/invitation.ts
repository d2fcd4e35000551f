import { createHash, randomBytes } from 'node:crypto';
import { LabError } from '@/lib/errors';
import { selectRow } from '@/models/queries/select';
import { writeAudit } from '@/models/queries/write-audit';
import { hashPassword, passwordProblem } from './password';

const SECRET_BYTES = 32;
/** An invitation is good for a week, ms. */
const GOOD_FOR_MS = 7 * 24 * 3_600_000;

const hashOf = (secret: string): Buffer => createHash('sha256').update(secret).digest();

/** A new invitation: its link goes to the person, its hash to their account. */
export function newInvitation(): { link: string; invitationHash: Buffer; invitationExpiresAt: Date } {
  const secret = randomBytes(SECRET_BYTES).toString('base64url');
  return {
    link: `/invitation/${secret}`,
    invitationHash: hashOf(secret),
    invitationExpiresAt: new Date(Date.now() + GOOD_FOR_MS),
  };
}

export interface Invited {
  userId: string;
  email: string;
  name: string;
}

/** Whom an invitation is for; null when it was used, has expired or never was. */
export async function findInvitation(secret: string): Promise<Invited | null> {
  return selectRow<Invited>(
    `SELECT id AS "userId", email, name FROM users
     WHERE invitation_hash = $1 AND invitation_expires_at > now() AND disabled_at IS NULL`,
    [hashOf(secret)],
  );
}

/**
 * The invited person chooses name and password; the invitation is used up.
 * @returns the e-mail to sign in with.
 * @throws LabError PASSWORD for one that is too easy, GONE for an invitation that is not good any more.
 */
export async function acceptInvitation(secret: string, name: string, password: string): Promise<string> {
  const invited = await findInvitation(secret);
  const gone = () => new LabError('GONE', 'This invitation was used or has expired. Ask for a new one.');
  if (!invited) throw gone();
  const problem = passwordProblem(password, [invited.email, name]);
  if (problem) throw new LabError('PASSWORD', problem, { errors: [{ path: 'password', message: problem }] });
  const used = await selectRow(
    `UPDATE users SET name = $2, password_hash = $3, invitation_hash = NULL, invitation_expires_at = NULL,
       session_version = session_version + 1, updated_at = now()
     WHERE id = $1 AND invitation_hash = $4 RETURNING id`,
    [invited.userId, name, await hashPassword(password), hashOf(secret)],
  );
  if (!used) throw gone();
  const { userId } = invited;
  await writeAudit({
    labId: null,
    userId,
    action: 'invitation.accepted',
    subjectKind: 'user',
    subjectId: userId,
  });
  return invited.email;
}
