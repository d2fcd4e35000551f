'use client';

import { useActionState } from 'react';
import { Button } from '@/components/ui/button';
import { Field } from '@/components/ui/field';
import { ErrorState } from '@/components/ui/page-states';

export type AskResult = { ok: true } | { ok: false; detail: string };

/** What the form shows: nothing yet, whom a link was asked for, or why it was not. */
export type AskState = { askedFor: string } | { email: string; problem: string } | null;

/** Asks for the link with which a new password is chosen; works before the page's script is there, too. */
export function AskNewPasswordForm({
  ask,
}: {
  ask: (before: AskState, form: FormData) => Promise<AskState>;
}) {
  const [state, act, busy] = useActionState(ask, null);
  if (state && 'askedFor' in state) {
    return (
      <div role="status" className="flex flex-col gap-2">
        <p>
          If <strong className="[overflow-wrap:anywhere]">{state.askedFor}</strong> has an account here, a
          mail with a link is on its way. The link works once and for an hour.
        </p>
        <p className="text-note text-ink-2">
          Nothing after some minutes? Look among unwanted mail, or ask your laboratory&rsquo;s administrator.
        </p>
      </div>
    );
  }
  return (
    <form
      action={act}
      className="flex w-full max-w-[320px] flex-col gap-3"
      aria-label="Ask for a new password"
    >
      <Field
        label="E-mail"
        name="email"
        type="email"
        autoComplete="username"
        required
        defaultValue={state?.email}
      />
      {state ? <ErrorState live what={state.problem} /> : null}
      <div>
        <Button type="submit" kind="main" busy={busy}>
          Send me a link
        </Button>
      </div>
    </form>
  );
}
