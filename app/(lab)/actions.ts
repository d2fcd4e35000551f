'use server';

import { cookies } from 'next/headers';
import { getViewer } from '@/auth/page';
import { cookieOptions, LAB_COOKIE } from '@/auth/session-cookie';

/** How long a browser remembers which laboratory its person was in. */
const REMEMBER_S = 365 * 86_400;

/** Makes another laboratory of the person the current one; anything else changes nothing. */
export async function switchLab(labId: string): Promise<void> {
  const viewer = await getViewer();
  if (!viewer?.labs.some(({ id }) => id === labId)) return;
  (await cookies()).set(LAB_COOKIE, labId, { ...cookieOptions(), maxAge: REMEMBER_S });
}
