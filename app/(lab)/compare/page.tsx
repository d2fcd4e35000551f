import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
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
        <CompareSheet />
      </Suspense>
    </>
  );
}
