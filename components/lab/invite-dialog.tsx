'use client';

import { useState } from 'react';
import { api, ApiError } from '@/components/data/api-client';
import { Button } from '@/components/ui/button';
import { Dialog } from '@/components/ui/dialog';
import { Field } from '@/components/ui/field';
import { ErrorState } from '@/components/ui/page-states';
import type { Role } from '@/lib/access';
import type { InvitedMemberView } from '@/lib/views/lab-view';
import { InvitationLink } from './invitation-link';
import { RolesChoice } from './roles-choice';

interface InviteDialogProps {
  onClose: () => void;
  onDone: () => Promise<unknown>;
}

/** Adds a person to the laboratory and shows the link that opens their account. */
export function InviteDialog({ onClose, onDone }: InviteDialogProps) {
  const [name, setName] = useState('');
  const [email, setEmail] = useState('');
  const [roles, setRoles] = useState<readonly Role[]>([]);
  const [problem, setProblem] = useState<Error | null>(null);
  const [busy, setBusy] = useState(false);
  const [member, setMember] = useState<InvitedMemberView | null>(null);
  async function invite() {
    setBusy(true);
    setProblem(null);
    try {
      setMember(
        await api<InvitedMemberView>('/api/v1/people', { method: 'POST', body: { name, email, roles } }),
      );
      await onDone();
    } catch (error) {
      setProblem(error instanceof Error ? error : new Error('That did not work.'));
    } finally {
      setBusy(false);
    }
  }
  if (member) {
    return <InvitationLink name={member.person.name} invitation={member.invitation} onClose={onClose} />;
  }
  const fields = problem instanceof ApiError ? problem.errors : [];
  const errorOf = (path: string) => fields.find((field) => field.path === path)?.message;
  return (
    <Dialog
      open
      onClose={onClose}
      title="Invite a person"
      actions={
        <>
          <Button kind="bare" onClick={onClose}>
            Leave it
          </Button>
          <Button
            kind="main"
            busy={busy}
            reason={roles.length === 0 ? 'Choose at least one role.' : null}
            onClick={() => void invite()}
          >
            Invite
          </Button>
        </>
      }
    >
      <div className="flex flex-col gap-3 pt-2">
        <Field
          label="Name"
          value={name}
          error={errorOf('name')}
          onChange={(event) => setName(event.target.value)}
          autoComplete="off"
          autoFocus
        />
        <Field
          label="E-mail"
          type="email"
          value={email}
          error={errorOf('email')}
          onChange={(event) => setEmail(event.target.value)}
          autoComplete="off"
        />
        <RolesChoice roles={roles} onChange={setRoles} />
        {problem && fields.length === 0 ? <ErrorState live what={problem.message} /> : null}
      </div>
    </Dialog>
  );
}
