'use server';

import { choosePassword } from '@/app/choose-password';
import type { ChooseResult } from '@/components/account/choose-password-form';

/** Chooses the new password by the link's secret. */
export async function chooseNewPassword(token: string, password: string): Promise<ChooseResult> {
  return choosePassword('password-reset', token, password);
}
