import type { Metadata } from 'next';
import Link from 'next/link';
import { AskNewPasswordForm } from '@/components/account/ask-new-password-form';
import { PlainPage } from '@/components/shell/plain-page';
import { askForNewPassword } from './actions';

export const metadata: Metadata = { title: 'New password' };
// Pages outside of a laboratory are made at each request too, like all others.
export const dynamic = 'force-dynamic';

export default function AskNewPasswordPage() {
  return (
    <PlainPage title="A new password">
      <p>A link with which you choose it comes by mail, to the address that you sign in with.</p>
      <AskNewPasswordForm ask={askForNewPassword} />
      <p className="text-note">
        <Link href="/sign-in">Back to sign-in</Link>
      </p>
    </PlainPage>
  );
}
