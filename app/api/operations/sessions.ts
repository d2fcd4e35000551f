import type { Viewer } from '@/auth/viewer';
import { isId } from '@/lib/ids';
import { notFound } from '@/lib/errors';
import type { SessionView } from '@/lib/views/lab-view';
import { getSequelize } from '@/models/database';
import { getMember } from '@/models/queries/people';
import { endSession, listSessions } from '@/models/queries/sessions';
import { writeAudit } from '@/models/queries/write-audit';

const list = async (userId: string, viewer: Viewer): Promise<{ items: SessionView[]; nextCursor: null }> => ({
  items: await listSessions(userId, viewer.session?.sessionId ?? null),
  nextCursor: null,
});

export const ownSessions = (viewer: Viewer) => list(viewer.userId, viewer);

export const sessionsOfMember = async (viewer: Viewer, memberId: string) =>
  list((await getMember(viewer.labId, memberId)).person.id, viewer);

/** Ends one session of one's own; the one that asks too, if it is named. */
export const endOwnSession = (viewer: Viewer, sessionId: string): Promise<void> =>
  end(viewer, viewer.userId, sessionId, 'user.session-ended');

/** A session is of the account: it ends for the member's other laboratories too. */
export const endSessionOfMember = async (
  viewer: Viewer,
  memberId: string,
  sessionId: string,
): Promise<void> =>
  end(viewer, (await getMember(viewer.labId, memberId)).person.id, sessionId, 'member.session-ended');

async function end({ labId, userId }: Viewer, ownerId: string, sessionId: string, action: string) {
  if (!isId(sessionId)) throw notFound('session');
  await getSequelize().transaction(async (transaction) => {
    await endSession(ownerId, sessionId, transaction);
    await writeAudit({ labId, userId, action, subjectKind: 'user', subjectId: ownerId }, transaction);
  });
}
