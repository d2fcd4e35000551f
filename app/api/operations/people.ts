import type { Transaction } from 'sequelize';
import { makeInvitation } from '@/auth/invitations';
import type { Viewer } from '@/auth/viewer';
import { askForAccountMail, askForMail } from '@/jobs/send-mail';
import { baseUrl } from '@/lib/env';
import { LabError } from '@/lib/errors';
import { invitationPath } from '@/lib/link-secret';
import type { MemberCreate } from '@/lib/schemas/lab';
import type { InvitationView, InvitedMemberView } from '@/lib/views/lab-view';
import { getSequelize } from '@/models/database';
import { endSessions } from '@/models/queries/account-links';
import { addMember, renewInvitation, type InvitationTeller } from '@/models/queries/invite-member';
import { getMember } from '@/models/queries/people';
import { writeAudit } from '@/models/queries/write-audit';

/** Makes a person a member and mails them; the link is in this answer only, the mail has one of its own. */
export async function inviteMember(viewer: Viewer, person: MemberCreate): Promise<InvitedMemberView> {
  const invitation = makeInvitation(new Date());
  const { member, invited } = await addMember(
    viewer.labId,
    person,
    invitation,
    viewer.userId,
    mailInvitation(viewer),
  );
  return { ...member, invitation: invited ? linkOf(invitation) : null };
}

/** A new link for somebody who has not taken the invitation; the ones before are closed. */
export async function inviteAgain(viewer: Viewer, memberId: string): Promise<InvitationView> {
  const invitation = makeInvitation(new Date());
  await renewInvitation(viewer.labId, memberId, invitation, viewer.userId, mailInvitation(viewer));
  return linkOf(invitation);
}

const mailInvitation =
  ({ labId, name }: Viewer): InvitationTeller =>
  ({ userId, opens }, transaction) =>
    askForMail(
      { labId, userId, order: { kind: opens ? 'invitation' : 'membership', byName: name }, site: baseUrl() },
      transaction,
    );

const linkOf = ({ text, expiresAt }: ReturnType<typeof makeInvitation>): InvitationView => ({
  url: `${baseUrl()}${invitationPath(text)}`,
  expiresAt: expiresAt.toISOString(),
});

/** Ends every session of a member, here and in their other laboratories: a session is of the account. */
export const endSessionsOf = (viewer: Viewer, memberId: string): Promise<void> =>
  actOnMember(viewer, memberId, 'member.sessions-ended', (person, transaction) =>
    endSessions(person.id, transaction),
  );

/**
 * Mails a member a link with which they choose a new password: nobody chooses it for them.
 * @throws LabError STATE for somebody who has none yet
 */
export const startPasswordReset = (viewer: Viewer, memberId: string): Promise<void> =>
  actOnMember(viewer, memberId, 'member.reset-started', async (person, transaction) => {
    if (person.invited) {
      throw new LabError('STATE', `${person.name} has no password yet: make a new invitation link instead.`);
    }
    const order = { kind: 'password-reset', byName: viewer.name } as const;
    await askForAccountMail({ userId: person.id, order, site: baseUrl() }, transaction);
  });

async function actOnMember(
  { labId, userId }: Viewer,
  memberId: string,
  action: string,
  act: (person: { id: string; name: string; invited: boolean }, transaction: Transaction) => Promise<void>,
): Promise<void> {
  const { person, invitedUntil } = await getMember(labId, memberId);
  await getSequelize().transaction(async (transaction) => {
    await act({ id: person.id, name: person.name, invited: invitedUntil !== null }, transaction);
    await writeAudit(
      {
        labId,
        userId,
        action,
        subjectKind: 'membership',
        subjectId: memberId,
        detail: { name: person.name },
      },
      transaction,
    );
  });
}
