'use server';

import { z } from 'zod';
import { memberAction } from '@/auth/action';
import { hashPassword, passwordFits, passwordProblem } from '@/auth/password';
import type { ChangePasswordResult } from '@/components/account/password-form';
import { LabError } from '@/lib/errors';
import { passwordHashOf, setPassword } from '@/models/queries/passwords';

const schema = z.strictObject({ current: z.string().max(1_000), next: z.string().max(1_000) });

const change = memberAction('own-account', schema, async ({ viewer, input }) => {
  if (!(await passwordFits(await passwordHashOf(viewer.userId), input.current))) {
    throw new LabError('PASSWORD', 'The password now is not right. Nothing was changed.');
  }
  const problem = passwordProblem(input.next, [viewer.name, viewer.email, viewer.lab.name]);
  if (problem) throw new LabError('PASSWORD', problem);
  await setPassword({ userId: viewer.userId, labId: viewer.labId }, await hashPassword(input.next));
});

export async function changeOwnPassword(current: string, next: string): Promise<ChangePasswordResult> {
  const result = await change({ current, next });
  return result.ok ? { ok: true } : { ok: false, detail: result.problem.detail };
}
