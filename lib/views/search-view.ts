import { z } from 'zod';

/** Things found, the best first; where they stand is told by the names around them. */
export const searchViewSchema = z.object({
  campaigns: z.array(z.object({ id: z.uuid(), name: z.string(), runs: z.int() })),
  runs: z.array(z.object({ id: z.uuid(), name: z.string(), campaignName: z.string() })),
  recordings: z.array(
    z.object({
      id: z.uuid(),
      name: z.string(),
      runName: z.string(),
      campaignName: z.string(),
      state: z.string(),
    }),
  ),
  people: z.array(z.object({ id: z.uuid(), name: z.string(), roles: z.array(z.string()) })),
  /** True where a list was cut. */
  more: z.boolean(),
});
export type SearchView = z.infer<typeof searchViewSchema>;
