import type { Metadata } from 'next';
import { requireViewer } from '@/auth/page';
import { may } from '@/auth/viewer';
import { CarrySection } from '@/components/corrections/carry-section';
import { HereToo } from '@/components/corrections/here-too';
import { HistoryTable } from '@/components/corrections/history-table';
import { PathThread } from '@/components/ui/path-thread';
import { PageTitle, Sheet } from '@/components/ui/sheet';
import { whoMay } from '@/lib/access';
import { getAnalysis } from '@/models/queries/analyses';
import { getCampaign } from '@/models/queries/campaigns';
import { getRecording } from '@/models/queries/recordings';
import { getRun } from '@/models/queries/runs';
import { found } from '../../../found';
import { pathLevels } from '../../../path-levels';

export const metadata: Metadata = { title: 'History of corrections' };

export default async function HistoryPage({ params }: { params: Promise<{ analysisId: string }> }) {
  const { analysisId } = await params;
  const viewer = await requireViewer('see-data', `/analyses/${analysisId}/history`);
  const analysis = await found(analysisId, (id) => getAnalysis(viewer.labId, id));
  const recording = await getRecording(viewer.labId, analysis.recordingId);
  const run = await getRun(viewer.labId, analysis.runId);
  const campaign = await getCampaign(viewer.labId, analysis.campaignId);
  const name = analysis.recipeName ?? 'unnamed recipe';
  const reason = analysis.signedOff
    ? 'This analysis was signed off: its corrections stay as they are.'
    : may(viewer, 'correct-tracks')
      ? null
      : `Tracks can be corrected by: ${whoMay('correct-tracks')}.`;
  return (
    <>
      <PathThread
        levels={pathLevels(viewer, { campaign, run, recording, analysis: { id: analysis.id, name } })}
      />
      <Sheet>
        <PageTitle>History of corrections, {analysis.recordingName}</PageTitle>
        <HereToo analysisId={analysis.id} place="history" />
        <HistoryTable analysisId={analysis.id} reason={reason} />
        <CarrySection analysis={analysis} reason={reason} />
      </Sheet>
    </>
  );
}
