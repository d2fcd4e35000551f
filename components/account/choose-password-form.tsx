'use client';

import { signIn } from 'next-auth/react';
import { useRouter } from 'next/navigation';
import { useState, type FormEvent } from 'react';
import { Button } from '@/components/ui/button';
import { Field } from '@/components/ui/field';
import { ErrorState } from '@/components/ui/page-states';

export type ChooseResult = { ok: true } | { ok: false; detail: string };

/** Chooses the password of an account by a link and signs its person in. */
export function ChoosePasswordForm({
  email,
  choose,
}: {
  email: string;
  choose: (password: string) => Promise<ChooseResult>;
}) {
  const router = useRouter();
  const [password, setPassword] = useState('');
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);

  async function submit(event: FormEvent) {
    event.preventDefault();
    setBusy(true);
    setProblem(null);
    try {
      const result = await choose(password);
      if (!result.ok) {
        setProblem(result.detail);
        return;
      }
      await signIn('credentials', { email, password, redirect: false });
      router.push('/');
      router.refresh();
    } catch {
      setProblem('The link to the server was lost. Try again.');
    } finally {
      setBusy(false);
    }
  }

  return (
    // Before the script is there a browser sends the form itself: by POST, so that nothing stands in the address.
    <form
      method="post"
      onSubmit={submit}
      className="flex w-full max-w-[320px] flex-col gap-3"
      aria-label="Choose a password"
    >
      <input type="hidden" name="username" autoComplete="username" value={email} readOnly />
      <Field
        label="Password"
        type="password"
        autoComplete="new-password"
        required
        help="at least 15 characters"
        value={password}
        onChange={(event) => setPassword(event.target.value)}
      />
      {problem ? <ErrorState live what={problem} /> : null}
      <div>
        <Button type="submit" kind="main" busy={busy}>
          Choose it and sign in
        </Button>
      </div>
    </form>
  );
}
