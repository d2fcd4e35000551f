import { setTimeout as pause } from 'node:timers/promises';
import { selectRow } from '@/models/queries/select';
import { writeAudit } from '@/models/queries/write-audit';
import { passwordFits } from './password';
import { countSignIn, forgetSignIns } from './sign-in-limits';

export interface SignedIn {
  id: string;
  sessionVersion: number;
}

export type SignInResult = { ok: true; person: SignedIn } | { ok: false; waitS: number | null };

/**
 * Checks e-mail and password. Unknown accounts, disabled ones, and wrong passwords can't be told
 * apart by answer or by time.
 */
export async function signInWith(email: string, password: string, address: string): Promise<SignInResult> {
  const attempt = { email: email.trim(), address };
  const { waitS, delayMs } = await countSignIn(attempt);
  const user = await selectRow<{ id: string; password_hash: string | null; session_version: number }>(
    `SELECT id, password_hash, session_version FROM users WHERE lower(email) = lower($1) AND disabled_at IS NULL`,
    [attempt.email],
  );
  if (waitS !== null) {
    await noteFailure(user?.id ?? null, 'too-many', address);
    return { ok: false, waitS };
  }
  const [fits] = await Promise.all([passwordFits(user?.password_hash ?? null, password), pause(delayMs)]);
  if (!user || !fits) {
    await noteFailure(user?.id ?? null, 'refused', address);
    return { ok: false, waitS: null };
  }
  await forgetSignIns(attempt);
  return { ok: true, person: { id: user.id, sessionVersion: user.session_version } };
}

async function noteFailure(userId: string | null, why: string, address: string): Promise<void> {
  await writeAudit({
    labId: null,
    userId,
    action: 'sign-in.failed',
    subjectKind: 'user',
    detail: { why, address },
  });
}
