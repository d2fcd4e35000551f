'use server';

import { hashInvitation } from '@/auth/invitations';
import { hashPassword, passwordProblem } from '@/auth/password';
import type { AcceptResult } from '@/components/invitation/invitation-form';
import { findInvited, setPassword } from '@/models/queries/passwords';

/** Takes the invitation by its secret: nobody is signed in yet, the secret is the right to do it. */
export async function acceptInvitation(token: string, password: string): Promise<AcceptResult> {
  if (typeof token !== 'string' || typeof password !== 'string' || password.length > 1_000) {
    return { ok: false, detail: 'This is not a password.' };
  }
  const invited = await findInvited(hashInvitation(token));
  if (!invited) return { ok: false, detail: 'The invitation was used already, or its week is over.' };
  const problem = passwordProblem(password, [invited.name, invited.email]);
  if (problem) return { ok: false, detail: problem };
  await setPassword({ userId: invited.userId, labId: null }, await hashPassword(password));
  return { ok: true };
}
