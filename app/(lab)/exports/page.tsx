import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { mayTo } from '@/auth/viewer';
import { ExportSheet } from '@/components/exports/export-sheet';
import { PathThread } from '@/components/ui/path-thread';
import { exportableAnalyses } from '@/models/queries/exportable-analyses';
import { lastContributors } from '@/models/queries/exports';
import { pathLevels } from '../path-levels';

export const metadata: Metadata = { title: 'Exports' };

interface Props {
  searchParams: Promise<{ analysis?: string | string[]; campaign?: string }>;
}

export default async function ExportsPage({ searchParams }: Props) {
  const viewer = await requireViewer('see-exports', '/exports');
  const [analyses, contributors] = await Promise.all([
    exportableAnalyses(viewer.labId),
    lastContributors(viewer.labId),
  ]);
  const { analysis, campaign } = await searchParams;
  const wanted = new Set([analysis ?? []].flat());
  return (
    <>
      <PathThread levels={pathLevels(viewer)} />
      <Suspense>
        <ExportSheet
          analyses={analyses}
          contributors={contributors}
          viewer={{ id: viewer.userId, name: viewer.name, mayStopAll: mayTo(viewer, 'stop-export', []) }}
          chosen={analyses.filter(({ id }) => wanted.has(id)).map(({ id }) => id)}
          campaignId={analyses.some(({ campaignId }) => campaignId === campaign) ? (campaign ?? '') : ''}
        />
      </Suspense>
    </>
  );
}
