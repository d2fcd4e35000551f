import { hashPassword, passwordProblem } from '@/auth/password';
import type { ChooseResult } from '@/components/account/choose-password-form';
import { askForAccountMail } from '@/jobs/send-mail';
import { baseUrl } from '@/lib/env';
import { hashLinkSecret } from '@/lib/link-secret';
import { findLinkOwner, passwordByLink, type LinkPurpose } from '@/models/queries/account-links';

const CLOSED: Record<LinkPurpose, string> = {
  invitation: 'The invitation was used already, or its week is over.',
  'password-reset': 'This link was used already, or its hour is over. Ask for a new one.',
};

/** Chooses a password by a link: its secret is the right to do it, and is used up. */
export async function choosePassword(
  purpose: LinkPurpose,
  secret: string,
  password: string,
): Promise<ChooseResult> {
  if (typeof secret !== 'string' || typeof password !== 'string' || password.length > 1_000) {
    return { ok: false, detail: 'This is not a password.' };
  }
  const hash = hashLinkSecret(secret);
  const owner = await findLinkOwner(hash, purpose);
  if (!owner) return { ok: false, detail: CLOSED[purpose] };
  const problem = passwordProblem(password, [owner.name, owner.email]);
  if (problem) return { ok: false, detail: problem };
  const used = await passwordByLink(
    hash,
    purpose,
    await hashPassword(password),
    async (userId, transaction) => {
      if (purpose === 'invitation') return;
      await askForAccountMail({ userId, order: { kind: 'password-changed' }, site: baseUrl() }, transaction);
    },
  );
  return used ? { ok: true } : { ok: false, detail: CLOSED[purpose] };
}
