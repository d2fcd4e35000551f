import { cache } from 'react';
import { requireViewer } from '@/auth/page';
import { getCampaign } from '@/models/queries/campaigns';
import { getRecording } from '@/models/queries/recordings';
import { getRun } from '@/models/queries/runs';
import { found } from '../../found';

/** The recording of an address with its run, campaign and the viewer, loaded once per request. */
export const loadRecording = cache(async (recordingId: string) => {
  const viewer = await requireViewer('list-records', `/recordings/${recordingId}`);
  const recording = await found(recordingId, (id) => getRecording(viewer.labId, id));
  const run = await getRun(viewer.labId, recording.runId);
  const campaign = await getCampaign(viewer.labId, recording.campaignId);
  return { viewer, recording, run, campaign };
});

/** What an analysis needs and the run does not say; null when it says everything. */
export function missingConditions(run: {
  id: string;
  pixelSize_m?: number | null;
  frameInterval_s?: number | null;
}) {
  const lacking = [
    ...(run.pixelSize_m ? [] : ['the pixel size']),
    ...(run.frameInterval_s ? [] : ['the frame interval']),
  ];
  if (lacking.length === 0) return null;
  const sentence = `An analysis needs ${lacking.join(' and ')}, and the run does not say.`;
  return { sentence, href: `/runs/${run.id}` };
}
