'use server';

import { z } from 'zod';
import { memberAction } from '@/auth/action';
import { hashPassword, passwordFits, passwordProblem } from '@/auth/password';
import type { ChangePasswordResult } from '@/components/account/password-form';
import { askForAccountMail } from '@/jobs/send-mail';
import { baseUrl } from '@/lib/env';
import { LabError } from '@/lib/errors';
import { reviewKeysSchema, type ReviewKeys } from '@/lib/review/review-keys';
import { NOTICE_KINDS, type NoticeKind } from '@/lib/mail/mail-kinds';
import { getSequelize } from '@/models/database';
import { endSessions } from '@/models/queries/account-links';
import { setReviewKeys } from '@/models/queries/review-keys';
import { setNoticesOff } from '@/models/queries/notices';
import { passwordHashOf, setPassword } from '@/models/queries/passwords';
import { writeAudit } from '@/models/queries/write-audit';

const schema = z.strictObject({ current: z.string().max(1_000), next: z.string().max(1_000) });

const change = memberAction('own-account', schema, async ({ viewer, input }) => {
  if (!(await passwordFits(await passwordHashOf(viewer.userId), input.current))) {
    throw new LabError('PASSWORD', 'The password now is not right. Nothing was changed.');
  }
  const problem = passwordProblem(input.next, [viewer.name, viewer.email, viewer.lab.name]);
  if (problem) throw new LabError('PASSWORD', problem);
  const { userId, labId } = viewer;
  const passwordHash = await hashPassword(input.next);
  await setPassword({ userId, labId }, passwordHash, (transaction) =>
    askForAccountMail({ userId, order: { kind: 'password-changed' }, site: baseUrl() }, transaction),
  );
});

const notices = memberAction(
  'own-account',
  z.strictObject({ off: z.array(z.enum(NOTICE_KINDS)) }),
  async ({ viewer, input }) => {
    await setNoticesOff(viewer.labId, viewer.userId, input.off);
  },
);

/** Which notices of this laboratory don't come by mail. */
export async function saveNotices(off: NoticeKind[]): Promise<{ ok: true } | { ok: false; detail: string }> {
  const result = await notices({ off });
  return result.ok ? { ok: true } : { ok: false, detail: result.problem.detail };
}

const leaveEverywhere = memberAction('own-account', z.strictObject({}), async ({ viewer }) => {
  await getSequelize().transaction(async (transaction) => {
    await endSessions(viewer.userId, transaction);
    const entry = { action: 'user.sessions-ended', subjectKind: 'user', subjectId: viewer.userId };
    await writeAudit({ labId: viewer.labId, userId: viewer.userId, ...entry }, transaction);
  });
});

/** Ends every session of one's own, this one too. */
export async function endOwnSessions(): Promise<{ ok: true } | { ok: false; detail: string }> {
  const result = await leaveEverywhere({});
  return result.ok ? { ok: true } : { ok: false, detail: result.problem.detail };
}

export async function changeOwnPassword(current: string, next: string): Promise<ChangePasswordResult> {
  const result = await change({ current, next });
  return result.ok ? { ok: true } : { ok: false, detail: result.problem.detail };
}

const reviewKeys = memberAction('review', reviewKeysSchema, async ({ viewer, input }) => {
  await setReviewKeys(viewer.labId, viewer.userId, input);
});

/** Which key does what on the review desk. */
export async function saveReviewKeys(
  keys: Partial<ReviewKeys>,
): Promise<{ ok: true } | { ok: false; detail: string }> {
  const result = await reviewKeys(keys);
  if (result.ok) return { ok: true };
  const { errors, detail } = result.problem;
  return { ok: false, detail: errors[0]?.message ?? detail };
}
