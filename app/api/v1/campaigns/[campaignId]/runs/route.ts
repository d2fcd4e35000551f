import { created } from '@/auth/answer';
import { may } from '@/auth/viewer';
import { runMetadata } from '@/lib/views/metadata-only';
import { getCampaign } from '@/models/queries/campaigns';
import { assertNotDeleted } from '@/models/queries/change-row';
import { assertTakes } from '@/models/queries/rehearsal-mark';
import { createRun, listRuns } from '@/models/queries/runs';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /campaigns/{campaignId}/runs', async ({ viewer, params, query }) => {
    await getCampaign(viewer.labId, params.campaignId);
    const page = await listRuns(viewer.labId, params.campaignId, query);
    return may(viewer, 'see-data') ? page : { ...page, items: page.items.map(runMetadata) };
  }),
  POST: memberRoute('POST /campaigns/{campaignId}/runs', async ({ viewer, params, body }) => {
    assertNotDeleted(await getCampaign(viewer.labId, params.campaignId), 'campaign');
    await assertTakes(viewer.labId, { campaignId: params.campaignId });
    const run = await createRun(viewer, params.campaignId, body);
    return created(run, `/api/v1/runs/${run.id}`);
  }),
});
