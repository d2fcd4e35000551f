import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { TokenPanel } from '@/components/lab/token-panel';
import { LabFrame } from '../lab-frame';

export const metadata: Metadata = { title: 'Tokens' };

export default async function TokensPage() {
  const viewer = await requireViewer('own-tokens', '/lab/tokens');
  return (
    <LabFrame viewer={viewer} tab="tokens">
      <Suspense>
        <TokenPanel scopes={viewer.scopes} />
      </Suspense>
    </LabFrame>
  );
}
