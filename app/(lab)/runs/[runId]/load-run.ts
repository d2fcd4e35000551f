import { cache } from 'react';
import { requireViewer } from '@/auth/page';
import { getCampaign } from '@/models/queries/campaigns';
import { getRun } from '@/models/queries/runs';
import { found } from '../../found';

/** The run of an address with its campaign and the viewer, loaded once per request. */
export const loadRun = cache(async (runId: string) => {
  const viewer = await requireViewer('list-records', `/runs/${runId}`);
  const run = await found(runId, (id) => getRun(viewer.labId, id));
  const campaign = await getCampaign(viewer.labId, run.campaignId);
  return { viewer, run, campaign };
});
