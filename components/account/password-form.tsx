'use client';

import { signOut } from 'next-auth/react';
import { useState, type FormEvent } from 'react';
import { Button } from '@/components/ui/button';
import { Field } from '@/components/ui/field';
import { ErrorState } from '@/components/ui/page-states';

export type ChangePasswordResult = { ok: true } | { ok: false; detail: string };

/** Changes one's own password; the session ends, and the new one is used to sign in again. */
export function PasswordForm({
  change,
}: {
  change: (current: string, next: string) => Promise<ChangePasswordResult>;
}) {
  const [current, setCurrent] = useState('');
  const [next, setNext] = useState('');
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);

  async function submit(event: FormEvent) {
    event.preventDefault();
    setBusy(true);
    setProblem(null);
    try {
      const result = await change(current, next);
      if (result.ok) await signOut({ callbackUrl: '/sign-in' });
      else setProblem(result.detail);
    } catch {
      setProblem('The link to the server was lost. The password is unchanged.');
    } finally {
      setBusy(false);
    }
  }

  return (
    <form onSubmit={submit} className="flex max-w-[320px] flex-col gap-3 pt-2" aria-label="Change password">
      <Field
        label="Password now"
        type="password"
        autoComplete="current-password"
        required
        value={current}
        onChange={(event) => setCurrent(event.target.value)}
      />
      <Field
        label="New password"
        type="password"
        autoComplete="new-password"
        required
        help="at least 15 characters"
        value={next}
        onChange={(event) => setNext(event.target.value)}
      />
      {problem ? <ErrorState live what={problem} /> : null}
      <div>
        <Button type="submit" kind="main" busy={busy}>
          Change password
        </Button>
      </div>
    </form>
  );
}
