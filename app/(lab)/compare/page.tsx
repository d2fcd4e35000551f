import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { may, mayTo } from '@/auth/viewer';
import { CompareSheet } from '@/components/compare/compare-sheet';
import { PathThread } from '@/components/ui/path-thread';
import { pathLevels } from '../path-levels';

export const metadata: Metadata = { title: 'Compare' };

export default async function ComparePage() {
  const viewer = await requireViewer('compare', '/compare');
  return (
    <>
      <PathThread levels={pathLevels(viewer)} />
      <Suspense>
        <CompareSheet
          viewer={{
            id: viewer.userId,
            mayEditAll: mayTo(viewer, 'edit-selection', []),
            mayLeaveOut: may(viewer, 'leave-out-run'),
          }}
        />
      </Suspense>
    </>
  );
}
