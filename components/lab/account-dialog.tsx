'use client';

import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { SessionTable } from '@/components/account/session-table';
import { api } from '@/components/data/api-client';
import { useAct } from '@/components/data/use-act';
import { Button } from '@/components/ui/button';
import { Dialog } from '@/components/ui/dialog';
import { ErrorState } from '@/components/ui/page-states';
import { StateWord } from '@/components/ui/state-bead';
import type { MemberView } from '@/lib/views/lab-view';

type Act = 'sessions-end' | 'password-reset';
const DONE: Record<Act, string> = {
  'sessions-end': 'Every session has ended.',
  'password-reset': 'A mail with the link is on its way.',
};

/** Help with a member's account: neither act shows or sets a password. */
export function AccountDialog({ member, onClose }: { member: MemberView; onClose: () => void }) {
  const client = useQueryClient();
  const { busy, problem, act } = useAct();
  const [done, setDone] = useState<Act | null>(null);
  const help = (which: Act) =>
    act(async () => {
      setDone(null);
      await api(`/api/v1/people/${member.id}/${which}`, { method: 'POST' });
      setDone(which);
      await client.invalidateQueries({ queryKey: ['sessions'] });
    }, which);
  return (
    <Dialog
      open
      onClose={onClose}
      title={`The account of ${member.person.name}`}
      actions={
        <Button kind="main" onClick={onClose}>
          Close
        </Button>
      }
    >
      <div className="flex flex-col items-start gap-2 pt-1">
        <p>A lost device, or a place left signed in: end that session, or all of them. Tokens stay.</p>
        <SessionTable source={`/api/v1/people/${member.id}/sessions`} />
        <Button busy={busy === 'sessions-end'} onClick={() => void help('sessions-end')}>
          End their sessions
        </Button>
        <p className="pt-3">
          A forgotten password: a link goes to{' '}
          <span className="[overflow-wrap:anywhere]">{member.person.email}</span> by mail, with which they
          choose a new one.
        </p>
        <Button busy={busy === 'password-reset'} onClick={() => void help('password-reset')}>
          Mail them a link
        </Button>
        <div role="status" className="min-h-5 pt-1">
          {done ? <StateWord state="done">{DONE[done]}</StateWord> : null}
        </div>
        {problem ? <ErrorState live what={problem} /> : null}
      </div>
    </Dialog>
  );
}
