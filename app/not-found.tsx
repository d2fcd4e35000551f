import type { Metadata } from 'next';
import { PlainPage } from '@/components/shell/plain-page';
import { ButtonLink } from '@/components/ui/button';

export const metadata: Metadata = { title: 'Not found' };

export default function NotFound() {
  return (
    <PlainPage title="Nothing is kept at this address">
      <p>It may have been removed, or it belongs to a laboratory that you are not signed in to.</p>
      <ButtonLink href="/" kind="main">
        Open the overview
      </ButtonLink>
    </PlainPage>
  );
}
