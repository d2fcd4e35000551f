'use client';

import { signIn } from 'next-auth/react';
import { useRouter } from 'next/navigation';
import { useRef, useState, type FormEvent } from 'react';
import { Button } from '@/components/ui/button';
import { Field } from '@/components/ui/field';
import { ErrorState } from '@/components/ui/page-states';

interface SignInFormProps {
  /** A path of this site. */
  destination: string;
}

interface Problem {
  what: string;
  todo: string;
}

const REFUSED: Problem = {
  what: 'E-mail and password do not belong together.',
  todo: 'Check both and try again.',
};
const TOO_MANY: Problem = {
  what: 'Too many tries for this account.',
  todo: 'Wait a quarter of an hour, then try again.',
};
const NO_LINK: Problem = { what: 'The server did not answer.', todo: 'Check your link and try again.' };

/** The sentence for an answer of the sign-in route; null when it let the person in. */
export function signInProblem(
  answer: { ok: boolean; status: number; error: string | null | undefined } | undefined,
): Problem | null {
  if (!answer) return NO_LINK;
  if (answer.ok && !answer.error) return null;
  if (answer.status === 429 || answer.error === 'TOO_MANY_REQUESTS') return TOO_MANY;
  return answer.status >= 500 ? NO_LINK : REFUSED;
}

/** E-mail and password; goes on to `destination` when they are right. */
export function SignInForm({ destination }: SignInFormProps) {
  const router = useRouter();
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<Problem | null>(null);
  const password = useRef<HTMLInputElement>(null);

  const onSubmit = async (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    setBusy(true);
    setProblem(null);
    let found: Problem | null;
    try {
      // Without an answer signIn would leave for an error page, and what was typed would be gone.
      if (!(await fetch('/api/auth/csrf')).ok) throw new Error('no answer');
      const answer = await signIn('credentials', {
        email: String(form.get('email') ?? '').trim(),
        password: String(form.get('password') ?? ''),
        redirect: false,
      });
      found = signInProblem(answer);
    } catch {
      found = NO_LINK;
    }
    if (found) {
      setProblem(found);
      setBusy(false);
      password.current?.focus();
      password.current?.select();
      return;
    }
    router.replace(destination);
    router.refresh();
  };

  return (
    // Before the script is there a browser sends the form itself: by POST, or the password would stand in the address.
    <form method="post" onSubmit={onSubmit} className="flex flex-col gap-4">
      <Field label="E-mail" name="email" type="email" autoComplete="username" required autoFocus />
      <Field
        label="Password"
        name="password"
        type="password"
        autoComplete="current-password"
        required
        ref={password}
      />
      {problem ? (
        <ErrorState what={problem.what} live>
          {problem.todo}
        </ErrorState>
      ) : null}
      <Button type="submit" kind="main" busy={busy} className="self-start">
        {busy ? 'Signing in' : 'Sign in'}
      </Button>
    </form>
  );
}
