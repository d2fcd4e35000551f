import { z } from 'zod';

const numberOrNull = z.number().nullable();
const interval = z.object({ value: z.number(), low: numberOrNull, high: numberOrNull });
const withError = z.object({ value: z.number(), error: numberOrNull });

/** One run with its newest finished analysis. */
export const comparedRunSchema = z.object({
  campaignId: z.uuid(),
  campaignName: z.string(),
  runId: z.uuid(),
  runName: z.string(),
  analysisId: z.uuid().nullable(),
  drive: z.string().nullable(),
  temperature_K: numberOrNull,
  heatFlux_W_m2: numberOrNull,
  vn_m_s: withError.nullable(),
  vns_m_s: withError.nullable(),
  /** By the method that was asked for. */
  lineDensity_m2: interval.nullable(),
  trappedShare: interval.nullable(),
  tracks: z.int().nullable(),
  acceptedCandidates: z.int().nullable(),
  /** Why it stands in the table but takes no part in the fit; null where it does. */
  leftOut: z.string().nullable(),
});
export type ComparedRun = z.infer<typeof comparedRunSchema>;

/** L^(1/2) = gamma (v_ns - v_0) over the runs of one campaign. */
export const comparedFitSchema = z.object({
  campaignId: z.uuid(),
  campaignName: z.string(),
  runs: z.int(),
  /** Mean over the runs of the fit. */
  temperature_K: numberOrNull,
  gamma_s_m2: interval.nullable(),
  v0_m_s: interval.nullable(),
  /** A published gamma at that temperature, from memory and unverified. */
  publishedGamma_s_m2: numberOrNull,
  note: z.string().nullable(),
});
export type ComparedFit = z.infer<typeof comparedFitSchema>;

export const compareViewSchema = z.object({
  method: z.string(),
  campaigns: z.array(z.object({ id: z.uuid(), name: z.string(), runs: z.int() })),
  runs: z.array(comparedRunSchema),
  fits: z.array(comparedFitSchema),
  /** True where there are more runs than are shown. */
  cut: z.boolean(),
});
export type CompareView = z.infer<typeof compareViewSchema>;
