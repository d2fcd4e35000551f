import { z } from 'zod';
import { nameSchema, noteSchema, tagsSchema } from './text';

export const campaignCreateSchema = z.strictObject({
  name: nameSchema,
  description: noteSchema.nullish(),
  tags: tagsSchema.optional(),
});
export const campaignPatchSchema = campaignCreateSchema.partial();
export type CampaignCreate = z.infer<typeof campaignCreateSchema>;
export type CampaignPatch = z.infer<typeof campaignPatchSchema>;
