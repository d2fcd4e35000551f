import type { Viewer } from '@/auth/viewer';
import type { MailView } from '@/lib/views/mail-view';
import { getMail } from '@/models/queries/mails';
import { writeAudit } from '@/models/queries/write-audit';

/** A mail with its words. Words to another person may hold a link to their account, so that reading them is noted. */
export async function readMail({ labId, userId }: Viewer, mailId: string): Promise<MailView> {
  const mail = await getMail(labId, mailId);
  if (mail.text !== null && mail.person.id !== userId) {
    await writeAudit({
      labId,
      userId,
      action: 'mail.read',
      subjectKind: 'mail',
      subjectId: mailId,
      detail: { kind: mail.kind, to: mail.person.name },
    });
  }
  return mail;
}
