import type { Metadata } from 'next';
import { redirect } from 'next/navigation';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { may } from '@/auth/viewer';
import { PeopleTable } from '@/components/lab/people-table';
import { NoPermission } from '@/components/ui/page-states';
import { whoMay } from '@/lib/access';
import { LabFrame } from './lab-frame';

export const metadata: Metadata = { title: 'Lab' };

export default async function LabPage() {
  const viewer = await requireViewer('own-account', '/lab');
  if (!may(viewer, 'see-people') && may(viewer, 'own-tokens')) redirect('/lab/tokens');
  return (
    <LabFrame viewer={viewer} tab="people">
      {may(viewer, 'see-people') ? (
        <Suspense>
          <PeopleTable mayChange={may(viewer, 'manage-people')} viewerId={viewer.userId} />
        </Suspense>
      ) : (
        <NoPermission>People and roles are shown to: {whoMay('see-people')}.</NoPermission>
      )}
    </LabFrame>
  );
}
