import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { mayTo } from '@/auth/viewer';
import { ExportSheet } from '@/components/exports/export-sheet';
import { PathThread } from '@/components/ui/path-thread';
import { SELECTION_NAMES, selectionQuery, type Selection } from '@/lib/schemas/selection';
import { campaignsToChoose, tagsToChoose } from '@/models/queries/compare';
import { exportableAnalyses } from '@/models/queries/exportable-analyses';
import { lastContributors } from '@/models/queries/exports';
import { pathLevels } from '../path-levels';

export const metadata: Metadata = { title: 'Exports' };

interface Props {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}

export default async function ExportsPage({ searchParams }: Props) {
  const viewer = await requireViewer('see-exports', '/exports');
  const { analysis, campaign, ...asked } = await searchParams;
  const [analyses, contributors, campaigns, tags] = await Promise.all([
    exportableAnalyses(viewer.labId, selectionOf({ ...asked, ...(campaign ? { campaigns: campaign } : {}) })),
    lastContributors(viewer.labId),
    campaignsToChoose(viewer.labId),
    tagsToChoose(viewer.labId),
  ]);
  const wanted = new Set([analysis ?? []].flat());
  return (
    <>
      <PathThread levels={pathLevels(viewer)} />
      <Suspense>
        <ExportSheet
          analyses={analyses}
          contributors={contributors}
          viewer={{
            id: viewer.userId,
            name: viewer.name,
            mayStopAll: mayTo(viewer, 'stop-export', []),
            mayEditAll: mayTo(viewer, 'edit-selection', []),
          }}
          chosen={analyses.filter(({ id }) => wanted.has(id)).map(({ id }) => id)}
          campaigns={campaigns}
          tags={tags}
        />
      </Suspense>
    </>
  );
}

/** The selection of an address; one that can't be read chooses nothing, so the page shows everything. */
function selectionOf(asked: Record<string, string | string[] | undefined>): Selection {
  const filters = Object.fromEntries(
    SELECTION_NAMES.flatMap((name) => (asked[name] ? [[name, asked[name]]] : [])),
  );
  const { success, data } = selectionQuery.safeParse(filters);
  return success ? data : {};
}
