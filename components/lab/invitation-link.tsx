'use client';

import { Button } from '@/components/ui/button';
import { Dialog } from '@/components/ui/dialog';
import { Moment } from '@/components/ui/moment';
import type { InvitationView } from '@/lib/views/lab-view';

interface InvitationLinkProps {
  name: string;
  /** Null for somebody who needs none. */
  invitation: InvitationView | null;
  onClose: () => void;
}

/** The link of an invitation, shown this once, to be handed to the person. */
export function InvitationLink({ name, invitation, onClose }: InvitationLinkProps) {
  if (!invitation) {
    return (
      <Dialog
        open
        onClose={onClose}
        title={`${name} is a member now`}
        actions={
          <Button kind="main" onClick={onClose}>
            Good
          </Button>
        }
      >
        <p>
          They have an account, or another laboratory&rsquo;s invitation to it: no link is needed. Whoever has
          an account is told by mail.
        </p>
      </Dialog>
    );
  }
  return (
    <Dialog
      open
      onClose={onClose}
      title={`The invitation of ${name}`}
      actions={
        <>
          <Button onClick={() => void navigator.clipboard.writeText(invitation.url)}>Copy</Button>
          <Button kind="main" onClick={onClose}>
            I have kept it
          </Button>
        </>
      }
    >
      <p>
        A mail with a link is on its way to them. This is another one to hand over yourself: it is shown this
        once. Whichever is used first opens the account, once; both end <Moment at={invitation.expiresAt} />.
      </p>
      <code className="mt-2 block break-all bg-sunk p-2" data-testid="invitation-link">
        {invitation.url}
      </code>
    </Dialog>
  );
}
