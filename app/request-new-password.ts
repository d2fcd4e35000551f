import { createHash } from 'node:crypto';
import { setTimeout as pause } from 'node:timers/promises';
import { log } from '@/auth/log';
import { addToWindow } from '@/auth/rate-limit';
import type { AskResult } from '@/components/account/ask-new-password-form';
import { askForAccountMail } from '@/jobs/send-mail';
import { baseUrl } from '@/lib/env';
import { isPlainAddress } from '@/lib/mail/header-text';
import { getSequelize } from '@/models/database';
import { findResettable } from '@/models/queries/passwords';
import { writeAudit } from '@/models/queries/write-audit';

/** Requests of one address of the net in a quarter of an hour; more are refused, whatever they ask. */
const PER_ADDRESS = 10;
const ADDRESS_WINDOW_S = 900;
/** Mails to one account in an hour; more are not sent, which nobody is told. */
const PER_ACCOUNT = 3;
const ACCOUNT_WINDOW_S = 3600;
/** Every answer takes so long, so that its time tells nothing either. */
const ANSWER_MS = 500;

/** Has a link for a new password mailed, if there is such an account; answers alike if there is none. */
export async function requestNewPassword(email: unknown, address: string): Promise<AskResult> {
  const typed = typeof email === 'string' ? email.trim() : '';
  if (!isPlainAddress(typed)) return { ok: false, detail: 'This is not an e-mail address.' };
  const { count, leftS } = await addToWindow(`new-password:address:${address}`, ADDRESS_WINDOW_S);
  if (count > PER_ADDRESS) {
    return { ok: false, detail: `Too many requests from here. Wait ${Math.ceil(leftS / 60)} min.` };
  }
  // A fault of the way that only accounts take must not show either.
  const sending = mailLink(typed, address).catch((err: unknown) =>
    log.error({ err }, 'no link could be mailed'),
  );
  await Promise.all([sending, pause(ANSWER_MS)]);
  return { ok: true };
}

async function mailLink(email: string, address: string): Promise<void> {
  const key = createHash('sha256').update(email.toLowerCase()).digest('hex');
  const { count } = await addToWindow(`new-password:account:${key}`, ACCOUNT_WINDOW_S);
  const account = await findResettable(email);
  if (!account || count > PER_ACCOUNT) return;
  const { userId } = account;
  await getSequelize().transaction(async (transaction) => {
    const order = { kind: 'password-reset', byName: null } as const;
    await askForAccountMail({ userId, order, site: baseUrl() }, transaction);
    const entry = { action: 'user.reset-asked', subjectKind: 'user', subjectId: userId, detail: { address } };
    await writeAudit({ labId: null, userId, ...entry }, transaction);
  });
}
