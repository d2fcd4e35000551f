import type { Metadata } from 'next';
import { PlainPage } from '@/components/shell/plain-page';
import { ButtonLink } from '@/components/ui/button';

export const metadata: Metadata = { title: 'Not open to you' };

export default function Forbidden() {
  return (
    <PlainPage title="This page isn’t open to your role">
      <p>Your laboratory&rsquo;s administrator can give you a role that opens it.</p>
      <ButtonLink href="/" kind="main">
        Open the overview
      </ButtonLink>
    </PlainPage>
  );
}
