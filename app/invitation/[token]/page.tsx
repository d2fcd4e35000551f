import type { Metadata } from 'next';
import { hashLinkSecret } from '@/lib/link-secret';
import { ChoosePasswordForm } from '@/components/account/choose-password-form';
import { PlainPage } from '@/components/shell/plain-page';
import { findLinkOwner } from '@/models/queries/account-links';
import { acceptInvitation } from './actions';

export const metadata: Metadata = { title: 'Invitation' };

export default async function InvitationPage({ params }: { params: Promise<{ token: string }> }) {
  const { token } = await params;
  const invited = await findLinkOwner(hashLinkSecret(token), 'invitation');
  if (!invited) {
    return (
      <PlainPage title="This invitation is not open">
        <p>
          It was used already, or its week is over. Ask your laboratory&rsquo;s administrator for a new one.
        </p>
      </PlainPage>
    );
  }
  return (
    <PlainPage title={`Welcome, ${invited.name}`}>
      <p>
        Choose the password for {invited.email}. Long is good; a few words that belong together only for you.
      </p>
      <ChoosePasswordForm email={invited.email} choose={acceptInvitation.bind(null, token)} />
    </PlainPage>
  );
}
