import { baseUrl } from '@/lib/env';
import { formatMoment } from '@/lib/format/time';
import { invitationPath, makeLinkSecret, NEW_PASSWORD_MS, newPasswordPath } from '@/lib/link-secret';
import { isPlainAddress } from '@/lib/mail/header-text';
import { LINK_KINDS, NOTICE_KINDS, type MailOrder, type NoticeKind } from '@/lib/mail/mail-kinds';
import { mailWords, stripName, STRIPS_MOST, type MailContext } from '@/lib/mail/mail-words';
import { renderMail } from '@/lib/mail/render-mail';
import { replaceLink } from '@/models/queries/account-links';
import { endMail, readWaitingMail, setMailState, type WaitingMail } from '@/models/queries/mails';
import { FinalFailure } from './final-failure';
import type { JobHandler } from './job-context';
import { deliverMail } from './mail/deliver-mail';
import { sendMailJob, type SendMailPayload } from './send-mail';
import { candidateStripFile } from './stack-folder';
import { readStackFile } from './stack-store';

export const sendMailHandler: JobHandler<SendMailPayload> = {
  definition: sendMailJob,
  async run({ claim, payload, commit }) {
    const mail = await readWaitingMail(claim.labId, claim.subjectId);
    if (!mail) return commit(async () => undefined);
    if (!isWanted(mail)) {
      return commit((transaction) => endMail(mail.id, { state: 'dropped' }, transaction));
    }
    if (!isPlainAddress(mail.email)) {
      throw new FinalFailure('ADDRESS', `The address of ${mail.name} is not one that mail can be sent to.`);
    }
    const site = payload.site ?? baseUrl();
    const link = await makeLink(mail, site);
    const words = mailWords(mail.order, { site, name: mail.name, labName: mail.labName, link });
    const pictures = await picturesOf(mail.order);
    const message = renderMail(words, mail.name, pictures.map(({ name }) => name)); // prettier-ignore
    const state = await deliverMail({
      id: mail.id,
      to: { name: mail.name, address: mail.email },
      ...message,
      pictures,
    });
    // What is kept to be read here has no parts beside it.
    const { subject, text, html } = renderMail(words, mail.name);
    const kept = state === 'kept' ? { text, html } : {};
    await commit((transaction) =>
      endMail(mail.id, { state, recipient: mail.email, subject, ...kept }, transaction),
    );
  },
  onGivenUp: ({ subjectId }, _reason, transaction) => setMailState(subjectId, 'failed', transaction),
};

/** Between asking and sending a person may have left, come in, or changed their mind. */
function isWanted({ order, member, disabled, hasPassword, invitedUntil, noticesOff }: WaitingMail): boolean {
  if (disabled || !member) return false;
  switch (order.kind) {
    case 'invitation':
      return !hasPassword && invitedUntil !== null && invitedUntil > new Date();
    case 'password-reset':
      return hasPassword;
    default:
      return !isNotice(order.kind) || !noticesOff.includes(order.kind);
  }
}

/** Strips of a mail on disagreements, as far as they are there. */
async function picturesOf(order: MailOrder): Promise<{ name: string; png: Buffer }[]> {
  if (order.kind !== 'review-disagreement') return [];
  const { recordingId, tracksRevision } = order;
  const found = await Promise.all(
    order.candidates.slice(0, STRIPS_MOST).map(async ({ id, event }) => {
      const png = await readStackFile(recordingId, candidateStripFile(recordingId, id, tracksRevision)).catch(
        () => null,
      );
      return png ? [{ name: stripName(event), png }] : [];
    }),
  );
  return found.flat();
}

const isNotice = (kind: string): kind is NoticeKind => (NOTICE_KINDS as readonly string[]).includes(kind);

/** A secret of this very attempt: nothing that opens an account lies in the database while the mail waits. */
async function makeLink(
  { userId, order, invitedUntil }: WaitingMail,
  site: string,
): Promise<MailContext['link']> {
  if (!LINK_KINDS.includes(order.kind)) return null;
  const { text, hash } = makeLinkSecret();
  const invites = order.kind === 'invitation';
  const expiresAt = invites ? invitedUntil! : new Date(Date.now() + NEW_PASSWORD_MS);
  await replaceLink(userId, invites ? 'invitation' : 'password-reset', { hash, expiresAt });
  const path = invites ? invitationPath(text) : newPasswordPath(text);
  return { url: site + path, until: formatMoment(expiresAt) };
}
