'use client';

import { useRouter } from 'next/navigation';
import { useRef, useState, type FormEvent } from 'react';
import { Button } from '@/components/ui/button';
import { Field } from '@/components/ui/field';
import { ErrorState } from '@/components/ui/page-states';
import { signInByPassword, type SignInProblem } from './sign-in-by-password';

interface SignInFormProps {
  /** A path of this site. */
  destination: string;
}

/** E-mail and password; goes on to `destination` when they are right. */
export function SignInForm({ destination }: SignInFormProps) {
  const router = useRouter();
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<SignInProblem | null>(null);
  const password = useRef<HTMLInputElement>(null);

  const onSubmit = async (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    setBusy(true);
    setProblem(null);
    const found = await signInByPassword(
      String(form.get('email') ?? '').trim(),
      String(form.get('password') ?? ''),
    );
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
