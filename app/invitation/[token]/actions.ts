'use server';

import { choosePassword } from '@/app/choose-password';
import type { ChooseResult } from '@/components/account/choose-password-form';

/** Takes the invitation by its secret: nobody is signed in yet, the secret is the right to do it. */
export async function acceptInvitation(token: string, password: string): Promise<ChooseResult> {
  return choosePassword('invitation', token, password);
}
