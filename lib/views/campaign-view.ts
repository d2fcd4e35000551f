import { z } from 'zod';
import { itemFields, personSchema } from './common';

export const campaignViewSchema = z.object({
  ...itemFields,
  name: z.string(),
  description: z.string().nullable(),
  tags: z.array(z.string()),
  /** How many people judge each reconnection candidate. */
  readings: z.int(),
  /** How many candidates of known truth each reader judges among those of an analysis. */
  knownCandidates: z.int(),
  createdBy: personSchema.nullable(),
  deletedAt: z.iso.datetime().nullable(),
  runs: z.int(),
  recordings: z.int(),
  /** Analyses by state, for the table of campaigns. */
  analyses: z.object({ running: z.int(), done: z.int(), failed: z.int() }),
});
export type CampaignView = z.infer<typeof campaignViewSchema>;
