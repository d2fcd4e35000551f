import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { AnalysisTable } from '@/components/analyses/analysis-table';
import { PathThread } from '@/components/ui/path-thread';
import { Section, Sheet } from '@/components/ui/sheet';
import { pathLevels } from '../../../path-levels';
import { loadRun } from '../load-run';
import { RunHead } from '../run-head';

interface Props {
  params: Promise<{ runId: string }>;
}

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: `Analyses of ${(await loadRun((await params).runId)).run.name}` };
}

export default async function RunAnalysesPage({ params }: Props) {
  const { runId } = await params;
  await requireViewer('see-data', `/runs/${runId}/analyses`);
  const loaded = await loadRun(runId);
  const { viewer, run, campaign } = loaded;
  return (
    <>
      <PathThread levels={pathLevels(viewer, { campaign, run })} />
      <Sheet>
        <RunHead loaded={loaded} tab="analyses" />
        <Suspense>
          <Section title="Analyses" count="newest first">
            <AnalysisTable
              source={`/api/v1/analyses?run=${run.id}`}
              empty="No recording of this run has been analysed yet. Open a recording to start one."
            />
          </Section>
        </Suspense>
      </Sheet>
    </>
  );
}
