import type { Metadata } from 'next';
import { redirect } from 'next/navigation';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { may } from '@/auth/viewer';
import { PeopleTable } from '@/components/lab/people-table';
import { LabFrame } from './lab-frame';

export const metadata: Metadata = { title: 'Lab' };

export default async function LabPage() {
  const viewer = await requireViewer('own-account', '/lab');
  // Who may not see the people begins at the first part that is theirs.
  if (!may(viewer, 'see-people')) redirect(may(viewer, 'own-tokens') ? '/lab/tokens' : '/lab/audit');
  return (
    <LabFrame viewer={viewer} tab="people">
      <Suspense>
        <PeopleTable mayChange={may(viewer, 'manage-people')} viewerId={viewer.userId} />
      </Suspense>
    </LabFrame>
  );
}
