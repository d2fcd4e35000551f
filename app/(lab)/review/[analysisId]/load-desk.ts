import { cache } from 'react';
import { requireViewer } from '@/auth/page';
import type { Action } from '@/lib/access';
import { getAnalysis } from '@/models/queries/analyses';
import { getCampaign } from '@/models/queries/campaigns';
import { getRecording } from '@/models/queries/recordings';
import { getRun } from '@/models/queries/runs';
import type { Conditions } from '@/tracking/types';
import { found } from '../../found';
import { pathLevels } from '../../path-levels';

/** What both desks of an analysis show around the candidate. */
export const loadDesk = cache(async (action: Action, analysisId: string, path: string) => {
  const viewer = await requireViewer(action, path);
  const analysis = await found(analysisId, (id) => getAnalysis(viewer.labId, id));
  const [recording, run, campaign] = await Promise.all([
    getRecording(viewer.labId, analysis.recordingId),
    getRun(viewer.labId, analysis.runId),
    getCampaign(viewer.labId, analysis.campaignId),
  ]);
  const { pixelSize_m, frameInterval_s } = analysis.conditions as unknown as Conditions;
  const name = analysis.recipeName ?? 'unnamed recipe';
  return {
    viewer,
    analysis,
    campaign,
    scale: { pixelSizeM: pixelSize_m, frameIntervalS: frameInterval_s },
    owner: `${viewer.labId}-${viewer.userId}`,
    levels: pathLevels(viewer, { campaign, run, recording, analysis: { id: analysis.id, name } }),
  };
});
