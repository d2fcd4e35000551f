'use server';

import { headers } from 'next/headers';
import { requestNewPassword } from '@/app/request-new-password';
import type { AskResult } from '@/components/account/ask-new-password-form';

/** Asks for a link by e-mail. The answer is the same whether or not there is such an account. */
export async function askForNewPassword(email: string): Promise<AskResult> {
  const forwarded = (await headers()).get('x-forwarded-for')?.split(',').at(-1)?.trim();
  return requestNewPassword(email, forwarded || 'unknown');
}
