import type { Transaction } from 'sequelize';
import { z } from 'zod';
import type { MailOrder } from '@/lib/mail/mail-kinds';
import { addMail, mailPlaceOf } from '@/models/queries/mails';
import { defineJob } from './job-definition';
import { enqueueJob } from './queue';

const FIRST_PAUSE_MS = 30_000;
const LONGEST_PAUSE_MS = 3_600_000;

/** Pause after a failed attempt: half a minute, doubling up to an hour, so that a mail server may be away for a day. */
export const mailPauseMs = (attempt: number): number =>
  Math.min(LONGEST_PAUSE_MS, FIRST_PAUSE_MS * 2 ** Math.min(attempt - 1, 20));

const payload = z.object({
  /** Origin of the site for the links: the web server knows it, a worker elsewhere may not. */
  site: z.url().optional(),
});
export type SendMailPayload = z.infer<typeof payload>;

/** Sends one mail. With these attempts and pauses the last one is made 24 hours after the first. */
export const sendMailJob = defineJob<SendMailPayload>({
  kind: 'send-mail',
  subject: 'mail',
  maxAttempts: 31,
  pauseMs: mailPauseMs,
  payload,
});

export interface MailRequest {
  labId: string;
  userId: string;
  order: MailOrder;
  site?: string;
}

/** Asks for a mail in the caller's transaction: it is sent if, and only if, what it tells of becomes true. */
export async function askForMail(
  { labId, userId, order, site }: MailRequest,
  transaction: Transaction,
  personal = false,
): Promise<void> {
  const subjectId = await addMail({ labId, userId, order, personal }, transaction);
  await enqueueJob(sendMailJob, { labId, subjectId, payload: { site } }, transaction);
}

/** The same for a mail about an account rather than a laboratory; an account without any gets none. */
export async function askForAccountMail(
  { userId, order, site }: Omit<MailRequest, 'labId'>,
  transaction: Transaction,
): Promise<void> {
  const place = await mailPlaceOf(userId, transaction);
  if (place) await askForMail({ labId: place.labId, userId, order, site }, transaction, place.personal);
}
