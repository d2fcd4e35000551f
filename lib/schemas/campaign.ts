import { z } from 'zod';
import { nameSchema, noteSchema, tagsSchema } from './text';

const KNOWN = 'knownCandidates must be a whole number from 0 to 20.';

export const campaignCreateSchema = z.strictObject({
  name: nameSchema,
  description: noteSchema.nullish(),
  tags: tagsSchema.optional(),
  /** How many people judge each reconnection candidate. */
  readings: z
    .int('readings must be 1, 2 or 3.')
    .min(1, 'readings must be 1, 2 or 3.')
    .max(3, 'readings must be 1, 2 or 3.')
    .optional(),
  /** How many candidates of rehearsals are mixed among those of an analysis, to measure each reader. */
  knownCandidates: z.int(KNOWN).min(0, KNOWN).max(20, KNOWN).optional(),
});
export const campaignPatchSchema = campaignCreateSchema.partial();
export type CampaignCreate = z.infer<typeof campaignCreateSchema>;
export type CampaignPatch = z.infer<typeof campaignPatchSchema>;
