import type { Metadata } from 'next';
import Link from 'next/link';
import { ChoosePasswordForm } from '@/components/account/choose-password-form';
import { PlainPage } from '@/components/shell/plain-page';
import { hashLinkSecret } from '@/lib/link-secret';
import { findLinkOwner } from '@/models/queries/account-links';
import { chooseNewPassword } from './actions';

// The address holds the secret: it must not go along to any other site.
export const metadata: Metadata = { title: 'New password', referrer: 'no-referrer' };

export default async function NewPasswordPage({ params }: { params: Promise<{ token: string }> }) {
  const { token } = await params;
  const owner = await findLinkOwner(hashLinkSecret(token), 'password-reset');
  if (!owner) {
    return (
      <PlainPage title="This link is not open">
        <p>It was used already, its hour is over, or a newer one was sent.</p>
        <p>
          <Link href="/new-password">Ask for a new one</Link>
        </p>
      </PlainPage>
    );
  }
  return (
    <PlainPage title="Choose a new password">
      <p>For {owner.email}. Long is good; a few words that belong together only for you.</p>
      <p className="text-note text-ink-2">Every session of the account ends, on this and on other devices.</p>
      <ChoosePasswordForm email={owner.email} choose={chooseNewPassword.bind(null, token)} />
    </PlainPage>
  );
}
