import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { AnalysisTable } from '@/components/analyses/analysis-table';
import { PathThread } from '@/components/ui/path-thread';
import { PageTitle, Sheet } from '@/components/ui/sheet';
import { pathLevels } from '../path-levels';

export const metadata: Metadata = { title: 'Analyses' };

export default async function AnalysesPage() {
  const viewer = await requireViewer('see-data', '/analyses');
  return (
    <>
      <PathThread levels={pathLevels(viewer)} />
      <Sheet>
        <PageTitle>Analyses</PageTitle>
        <Suspense>
          <AnalysisTable
            source="/api/v1/analyses"
            empty="No analyses yet. Open a recording and start one, or try a recipe on a few frames first."
          />
        </Suspense>
      </Sheet>
    </>
  );
}
