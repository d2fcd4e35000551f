'use client';

import { signIn } from 'next-auth/react';

/** Why somebody was not let in, and what to do. */
export interface SignInProblem {
  what: string;
  todo: string;
}

const REFUSED: SignInProblem = {
  what: 'E-mail and password do not belong together.',
  todo: 'Check both and try again.',
};
const TOO_MANY: SignInProblem = {
  what: 'Too many tries for this account.',
  todo: 'Wait a quarter of an hour, then try again.',
};
const NO_LINK: SignInProblem = {
  what: 'The server did not answer.',
  todo: 'Check your link and try again.',
};

/** The sentence for an answer of the sign-in route; null when it let the person in. */
export function signInProblem(
  answer: { ok: boolean; status: number; error: string | null | undefined } | undefined,
): SignInProblem | null {
  if (!answer) return NO_LINK;
  if (answer.ok && !answer.error) return null;
  if (answer.status === 429 || answer.error === 'TOO_MANY_REQUESTS') return TOO_MANY;
  return answer.status >= 500 ? NO_LINK : REFUSED;
}

/** Signs in without leaving the page. @returns null when the person is in */
export async function signInByPassword(email: string, password: string): Promise<SignInProblem | null> {
  try {
    // Without an answer signIn would leave for an error page, and what was typed would be gone.
    if (!(await fetch('/api/auth/csrf')).ok) throw new Error('no answer');
    return signInProblem(await signIn('credentials', { email, password, redirect: false }));
  } catch {
    return NO_LINK;
  }
}
