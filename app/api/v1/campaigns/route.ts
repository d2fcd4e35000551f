import { created } from '@/auth/answer';
import { createCampaign, listCampaigns } from '@/models/queries/campaigns';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /campaigns', ({ viewer, query }) => listCampaigns(viewer.labId, query)),
  POST: memberRoute('POST /campaigns', async ({ viewer, body }) => {
    const campaign = await createCampaign(viewer, body);
    return created(campaign, `/api/v1/campaigns/${campaign.id}`);
  }),
});
