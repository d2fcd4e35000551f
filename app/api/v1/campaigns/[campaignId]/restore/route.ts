import { restoreThing } from '@/app/api/operations/remove';
import { getCampaign } from '@/models/queries/campaigns';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /campaigns/{campaignId}/restore', async ({ viewer, params }) => {
    await restoreThing(viewer, 'campaign', params.campaignId);
    return getCampaign(viewer.labId, params.campaignId);
  }),
});
