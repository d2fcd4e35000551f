import type { Metadata } from 'next';
import { cache } from 'react';
import { requireViewer } from '@/auth/page';
import { may } from '@/auth/viewer';
import { viewedRecording } from '@/components/canvas/viewed-recording';
import { EditorSheet } from '@/components/editor/editor-sheet';
import { NoPermission } from '@/components/ui/page-states';
import { PathThread } from '@/components/ui/path-thread';
import { Sheet } from '@/components/ui/sheet';
import { whoMay } from '@/lib/access';
import { getAnalysis } from '@/models/queries/analyses';
import { getCampaign } from '@/models/queries/campaigns';
import { listCorrections } from '@/models/queries/list-corrections';
import { getRecording } from '@/models/queries/recordings';
import { getRun } from '@/models/queries/runs';
import type { Conditions } from '@/tracking/types';
import { found } from '../../../found';
import { pathLevels } from '../../../path-levels';

interface Props {
  params: Promise<{ analysisId: string }>;
  searchParams: Promise<{ frame?: string; track?: string }>;
}

/** Corrections of before that can be taken back with Undo; older ones in the history. */
const REMEMBERED = 200;

const load = cache(async (analysisId: string) => {
  const viewer = await requireViewer('see-data', `/analyses/${analysisId}/edit`);
  const analysis = await found(analysisId, (id) => getAnalysis(viewer.labId, id));
  const recording = await getRecording(viewer.labId, analysis.recordingId);
  const run = await getRun(viewer.labId, analysis.runId);
  const campaign = await getCampaign(viewer.labId, analysis.campaignId);
  return { viewer, analysis, recording, run, campaign };
});

const numberIn = (text: string | undefined): number | null =>
  text !== undefined && /^\d{1,9}$/.test(text) ? Number(text) : null;

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: `Tracks of ${(await load((await params).analysisId)).analysis.recordingName}` };
}

export default async function EditPage({ params, searchParams }: Props) {
  const { viewer, analysis, recording, run, campaign } = await load((await params).analysisId);
  const { frame, track } = await searchParams;
  const conditions = analysis.conditions as Partial<Conditions>;
  const viewed = viewedRecording(recording, conditions.frameInterval_s ?? null);
  const name = analysis.recipeName ?? 'unnamed recipe';
  const log = await listCorrections(viewer.labId, analysis.id, { sort: '-revision', limit: REMEMBERED });
  return (
    <>
      <PathThread
        levels={[
          ...pathLevels(viewer, {
            campaign,
            run,
            rehearsal: analysis.rehearsal,
            recording,
            analysis: { id: analysis.id, name },
          }),
          { kind: 'Tracks', name: 'Correct', href: `/analyses/${analysis.id}/edit` },
        ]}
      />
      <Sheet>
        {viewed && analysis.state === 'done' ? (
          <EditorSheet
            analysisId={analysis.id}
            userId={viewer.userId}
            recording={viewed}
            title={`Tracks of ${analysis.recordingName}`}
            initial={{ revision: log.revision, nextTrack: log.nextTrack, items: log.items.reverse() }}
            closed={analysis.signedOff ? (analysis.signedOff.by?.name ?? 'A principal investigator') : null}
            readOnly={
              may(viewer, 'correct-tracks')
                ? null
                : `Tracks can be corrected by: ${whoMay('correct-tracks')}.`
            }
            frame={numberIn(frame) ?? 0}
            track={numberIn(track)}
          />
        ) : (
          <NoPermission>
            Tracks can be corrected once the analysis is done and its recording is ready. This one is{' '}
            {analysis.state}.
          </NoPermission>
        )}
      </Sheet>
    </>
  );
}
