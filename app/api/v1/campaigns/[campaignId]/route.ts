import { removeThing } from '@/app/api/operations/remove';
import { done } from '@/auth/answer';
import { assertMayTo } from '@/auth/viewer';
import { getCampaign, patchCampaign } from '@/models/queries/campaigns';
import { assertNotDeleted } from '@/models/queries/change-row';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /campaigns/{campaignId}', ({ viewer, params }) =>
    getCampaign(viewer.labId, params.campaignId),
  ),
  PATCH: memberRoute('PATCH /campaigns/{campaignId}', async ({ viewer, params, body, ifMatch }) => {
    const campaign = await getCampaign(viewer.labId, params.campaignId);
    assertMayTo(viewer, 'edit-campaign', [campaign.createdBy?.id ?? null]);
    assertNotDeleted(campaign, 'campaign');
    return patchCampaign({ labId: viewer.labId, userId: viewer.userId, id: campaign.id, ifMatch }, body);
  }),
  DELETE: memberRoute('DELETE /campaigns/{campaignId}', async ({ viewer, params }) => {
    await removeThing(viewer, 'campaign', params.campaignId);
    return done();
  }),
});
