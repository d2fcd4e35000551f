'use client';

import { useQueryClient } from '@tanstack/react-query';
import { useRef, useState, type FormEvent } from 'react';
import { signInByPassword, type SignInProblem } from '@/components/sign-in/sign-in-by-password';
import { Button, ButtonLink } from '@/components/ui/button';
import { Dialog } from '@/components/ui/dialog';
import { Field } from '@/components/ui/field';
import { ErrorState } from '@/components/ui/page-states';
import { sessionIsBack, useSessionEnded } from './session-ended';

/** Stands over a page whose session has ended: what was typed stays where it is until the person is back. */
export function SignInAgain({ email }: { email: string }) {
  const ended = useSessionEnded();
  const queries = useQueryClient();
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<SignInProblem | null>(null);
  const password = useRef<HTMLInputElement>(null);

  const onSubmit = async (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    setBusy(true);
    setProblem(null);
    const found = await signInByPassword(email, password.current?.value ?? '');
    setBusy(false);
    setProblem(found);
    if (found) return password.current?.select();
    sessionIsBack();
    await queries.invalidateQueries();
  };

  return (
    <Dialog open={ended} onClose={sessionIsBack} title="Your session has ended">
      <form method="post" onSubmit={onSubmit} className="flex flex-col gap-3">
        <p>Nothing that you typed is lost: sign in again, then save.</p>
        <Field label="E-mail" name="email" type="email" autoComplete="username" value={email} readOnly />
        <Field
          label="Password"
          name="password"
          type="password"
          autoComplete="current-password"
          required
          autoFocus
          ref={password}
        />
        {problem ? (
          <ErrorState what={problem.what} live>
            {problem.todo}
          </ErrorState>
        ) : null}
        <div className="flex flex-wrap justify-end gap-2">
          <ButtonLink kind="bare" href="/sign-in">
            Sign in as somebody else
          </ButtonLink>
          <Button type="submit" kind="main" busy={busy}>
            {busy ? 'Signing in' : 'Sign in'}
          </Button>
        </div>
      </form>
    </Dialog>
  );
}
