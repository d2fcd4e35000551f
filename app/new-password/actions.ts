'use server';

import { headers } from 'next/headers';
import { requestNewPassword } from '@/app/request-new-password';
import type { AskState } from '@/components/account/ask-new-password-form';

/** Asks for a link by e-mail. The answer is the same whether or not there is such an account. */
export async function askForNewPassword(_before: AskState, form: FormData): Promise<AskState> {
  const email = String(form.get('email') ?? '').trim();
  const forwarded = (await headers()).get('x-forwarded-for')?.split(',').at(-1)?.trim();
  const result = await requestNewPassword(email, forwarded || 'unknown');
  return result.ok ? { askedFor: email } : { email: email.slice(0, 254), problem: result.detail };
}
