'use server';

import { z } from 'zod';
import { memberAction } from '@/auth/action';
import { assertMayTo } from '@/auth/viewer';
import type { SaveCampaignResult } from '@/components/campaigns/campaign-dialog';
import { campaignCreateSchema, type CampaignCreate } from '@/lib/schemas/campaign';
import { createCampaign, getCampaign, patchCampaign } from '@/models/queries/campaigns';

const create = memberAction('create-campaign', campaignCreateSchema, ({ viewer, input }) =>
  createCampaign(viewer, input),
);

const patchSchema = z.strictObject({ id: z.uuid(), revision: z.int(), campaign: campaignCreateSchema });

const patch = memberAction('edit-campaign', patchSchema, async ({ viewer, input }) => {
  const { createdBy } = await getCampaign(viewer.labId, input.id);
  assertMayTo(viewer, 'edit-campaign', [createdBy?.id ?? null]);
  return patchCampaign(
    { labId: viewer.labId, userId: viewer.userId, id: input.id, ifMatch: [input.revision] },
    input.campaign,
  );
});

const resultOf = (result: Awaited<ReturnType<typeof create>>): SaveCampaignResult =>
  result.ok
    ? { ok: true, id: result.data.id }
    : { ok: false, code: result.problem.code, detail: result.problem.detail, errors: result.problem.errors };

export async function addCampaign(campaign: CampaignCreate): Promise<SaveCampaignResult> {
  return resultOf(await create(campaign));
}

export async function editCampaign(
  id: string,
  revision: number,
  campaign: CampaignCreate,
): Promise<SaveCampaignResult> {
  return resultOf(await patch({ id, revision, campaign }));
}
