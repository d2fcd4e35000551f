import type { Metadata } from 'next';
import { cache } from 'react';
import { requireViewer } from '@/auth/page';
import { may, mayTo, type Viewer } from '@/auth/viewer';
import { AnalysisSheet } from '@/components/analyses/analysis-sheet';
import { viewedRecording } from '@/components/canvas/viewed-recording';
import { ButtonLink } from '@/components/ui/button';
import { NoPermission } from '@/components/ui/page-states';
import { PathThread } from '@/components/ui/path-thread';
import { Sheet } from '@/components/ui/sheet';
import { whoMay } from '@/lib/access';
import { conditionsWords } from '@/lib/conditions-words';
import { getAnalysis } from '@/models/queries/analyses';
import { getCampaign } from '@/models/queries/campaigns';
import { getRecording } from '@/models/queries/recordings';
import { getRun } from '@/models/queries/runs';
import type { Conditions } from '@/tracking/types';
import { found } from '../../found';
import { pathLevels } from '../../path-levels';

interface Props {
  params: Promise<{ analysisId: string }>;
}

const load = cache(async (analysisId: string) => {
  const viewer = await requireViewer('see-data', `/analyses/${analysisId}`);
  const analysis = await found(analysisId, (id) => getAnalysis(viewer.labId, id));
  const recording = await getRecording(viewer.labId, analysis.recordingId);
  const run = await getRun(viewer.labId, analysis.runId);
  const campaign = await getCampaign(viewer.labId, analysis.campaignId);
  return { viewer, analysis, recording, run, campaign };
});

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: `Analysis of ${(await load((await params).analysisId)).analysis.recordingName}` };
}

export default async function AnalysisPage({ params }: Props) {
  const { viewer, analysis, recording, run, campaign } = await load((await params).analysisId);
  const conditions = analysis.conditions as Partial<Conditions>;
  const viewed = viewedRecording(recording, conditions.frameInterval_s ?? null);
  const makers = [analysis.createdBy?.id ?? null, run.createdBy?.id ?? null];
  const name = analysis.recipeName ?? 'unnamed recipe';
  return (
    <>
      <PathThread
        levels={pathLevels(viewer, {
          campaign,
          run,
          rehearsal: analysis.rehearsal,
          recording,
          analysis: { id: analysis.id, name },
        })}
        actions={
          analysis.state === 'done' ? (
            <ButtonLink href={`/analyses/${analysis.id}/edit`}>
              {may(viewer, 'correct-tracks') && !analysis.signedOff
                ? 'Correct tracks'
                : 'Look at the tracks closely'}
            </ButtonLink>
          ) : null
        }
      />
      <Sheet>
        {viewed ? (
          <AnalysisSheet
            initial={analysis}
            recording={{ ...viewed, sha256: recording.sha256 }}
            conditions={conditionsWords(conditions)}
            stopReason={
              mayTo(viewer, 'stop-analysis', makers)
                ? null
                : `It can be stopped by: ${whoMay('stop-analysis')}.`
            }
            judge={deskOf(viewer, analysis.id)}
            signOffReason={may(viewer, 'sign-off') ? null : `It can be signed off by: ${whoMay('sign-off')}.`}
            downloadReason={
              may(viewer, 'download-tables') ? null : `Files can be had by: ${whoMay('download-tables')}.`
            }
          />
        ) : (
          <NoPermission>
            The recording of this analysis is being checked again. Come back when it is ready.
          </NoPermission>
        )}
      </Sheet>
    </>
  );
}

function deskOf(viewer: Viewer, analysisId: string): { href: string; label: string } | null {
  if (may(viewer, 'review')) return { href: `/review/${analysisId}`, label: 'Judge them' };
  return may(viewer, 'settle')
    ? { href: `/review/${analysisId}/settle`, label: 'Settle disagreements' }
    : null;
}
