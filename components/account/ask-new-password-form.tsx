'use client';

import { useState, type FormEvent } from 'react';
import { Button } from '@/components/ui/button';
import { Field } from '@/components/ui/field';
import { ErrorState } from '@/components/ui/page-states';

export type AskResult = { ok: true } | { ok: false; detail: string };

/** Asks for the link with which a new password is chosen. */
export function AskNewPasswordForm({ ask }: { ask: (email: string) => Promise<AskResult> }) {
  const [email, setEmail] = useState('');
  const [askedFor, setAskedFor] = useState<string | null>(null);
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);

  async function submit(event: FormEvent) {
    event.preventDefault();
    setBusy(true);
    setProblem(null);
    try {
      const result = await ask(email);
      if (result.ok) setAskedFor(email.trim());
      else setProblem(result.detail);
    } catch {
      setProblem('The link to the server was lost. Try again.');
    } finally {
      setBusy(false);
    }
  }

  if (askedFor !== null) {
    return (
      <div role="status" className="flex flex-col gap-2">
        <p>
          If <strong className="[overflow-wrap:anywhere]">{askedFor}</strong> has an account here, a mail with
          a link is on its way. The link works once and for an hour.
        </p>
        <p className="text-note text-ink-2">
          Nothing after some minutes? Look among unwanted mail, or ask your laboratory&rsquo;s administrator.
        </p>
      </div>
    );
  }
  return (
    <form
      onSubmit={submit}
      className="flex w-full max-w-[320px] flex-col gap-3"
      aria-label="Ask for a new password"
    >
      <Field
        label="E-mail"
        name="email"
        type="email"
        autoComplete="username"
        required
        value={email}
        onChange={(event) => setEmail(event.target.value)}
      />
      {problem ? <ErrorState live what={problem} /> : null}
      <div>
        <Button type="submit" kind="main" busy={busy}>
          Send me a link
        </Button>
      </div>
    </form>
  );
}
