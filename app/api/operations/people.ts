import { invitationPath, makeInvitation } from '@/auth/invitations';
import type { Viewer } from '@/auth/viewer';
import { baseUrl } from '@/lib/env';
import type { MemberCreate } from '@/lib/schemas/lab';
import type { InvitationView, InvitedMemberView } from '@/lib/views/lab-view';
import { addMember, renewInvitation } from '@/models/queries/invite-member';

/** Makes a person a member; the link is in this answer only. */
export async function inviteMember(viewer: Viewer, person: MemberCreate): Promise<InvitedMemberView> {
  const invitation = makeInvitation(new Date());
  const { member, invited } = await addMember(viewer.labId, person, invitation, viewer.userId);
  return { ...member, invitation: invited ? linkOf(invitation) : null };
}

/** A new link for somebody who has not taken the invitation; the one before is closed. */
export async function inviteAgain(viewer: Viewer, memberId: string): Promise<InvitationView> {
  const invitation = makeInvitation(new Date());
  await renewInvitation(viewer.labId, memberId, invitation, viewer.userId);
  return linkOf(invitation);
}

const linkOf = ({ text, expiresAt }: ReturnType<typeof makeInvitation>): InvitationView => ({
  url: `${baseUrl()}${invitationPath(text)}`,
  expiresAt: expiresAt.toISOString(),
});
