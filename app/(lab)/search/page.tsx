import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { SearchSheet } from '@/components/search/search-sheet';
import { PathThread } from '@/components/ui/path-thread';
import { pathLevels } from '../path-levels';

export const metadata: Metadata = { title: 'Search' };

export default async function SearchPage() {
  const viewer = await requireViewer('list-records', '/search');
  return (
    <>
      <PathThread levels={pathLevels(viewer)} />
      <Suspense>
        <SearchSheet />
      </Suspense>
    </>
  );
}
