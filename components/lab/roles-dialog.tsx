'use client';

import { useState } from 'react';
import { api } from '@/components/data/api-client';
import { useAct } from '@/components/data/use-act';
import { Button } from '@/components/ui/button';
import { Dialog } from '@/components/ui/dialog';
import { ErrorState } from '@/components/ui/page-states';
import type { Role } from '@/lib/access';
import type { MemberView } from '@/lib/views/lab-view';
import { RolesChoice } from './roles-choice';

interface RolesDialogProps {
  member: MemberView;
  onClose: () => void;
  onDone: () => Promise<unknown>;
}

/** Gives a member other roles. */
export function RolesDialog({ member, onClose, onDone }: RolesDialogProps) {
  const [roles, setRoles] = useState<readonly Role[]>(member.roles);
  const { busy, problem, act } = useAct();
  async function save() {
    await api(`/api/v1/people/${member.id}`, { method: 'PATCH', body: { roles }, revision: member.revision });
    await onDone();
    onClose();
  }
  return (
    <Dialog
      open
      onClose={onClose}
      title={`Roles of ${member.person.name}`}
      actions={
        <>
          <Button kind="bare" onClick={onClose}>
            Leave them
          </Button>
          <Button
            kind="main"
            busy={busy !== null}
            reason={roles.length === 0 ? 'At least one role.' : null}
            onClick={() => void act(save)}
          >
            Save roles
          </Button>
        </>
      }
    >
      <p className="pb-2">Their sessions end, so that the new rights hold at once. What they made stays.</p>
      <RolesChoice roles={roles} onChange={setRoles} />
      {problem ? <ErrorState live what={problem} /> : null}
    </Dialog>
  );
}
