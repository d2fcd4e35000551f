import { z } from 'zod';
import { itemFields, personSchema } from './common';

const numberOrNull = z.number().nullable();
const list = z.array(numberOrNull);
const interval = z.object({ value: z.number(), low: numberOrNull, high: numberOrNull });
const withError = z.object({ value: z.number(), error: numberOrNull });

/** One run with one of its finished analyses: the one that was signed off last, else the newest. */
export const comparedRunSchema = z.object({
  campaignId: z.uuid(),
  campaignName: z.string(),
  runId: z.uuid(),
  runName: z.string(),
  startedAt: z.iso.datetime().nullable(),
  tags: z.array(z.string()),
  analysisId: z.uuid().nullable(),
  drive: z.string().nullable(),
  temperature_K: numberOrNull,
  pressure_Pa: numberOrNull,
  heatFlux_W_m2: numberOrNull,
  vn_m_s: withError.nullable(),
  vs_m_s: withError.nullable(),
  vns_m_s: withError.nullable(),
  /** By the method that was asked for. */
  lineDensity_m2: interval.nullable(),
  /** By every method that gives one. */
  lineDensities_m2: z.array(interval.extend({ method: z.string() })),
  trappedShare: interval.nullable(),
  tracks: z.int().nullable(),
  acceptedCandidates: z.int().nullable(),
  /** Events that people confirmed, of the candidates that have a verdict, per volume of the light sheet and time. */
  events: z
    .object({
      confirmed: z.int(),
      judged: z.int(),
      candidates: z.int(),
      perVolumeTime_m3_s: interval.nullable(),
    })
    .nullable(),
  /** Of the tail of the speeds of trapped tracers at the shortest lag that has one. */
  tailExponent: interval.nullable(),
  /** Cohen's kappa of blind verdicts, over all pairs of readers. */
  agreement: interval.extend({ count: z.int() }).nullable(),
  signedOff: z.object({ at: z.iso.datetime(), by: z.string().nullable() }).nullable(),
  /** What a person left out of fits, and why. */
  exclusion: z.object({ reason: z.string(), by: z.string(), at: z.iso.datetime() }).nullable(),
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
  /** Of all runs and campaigns, to choose from. */
  tags: z.array(z.string()),
  runs: z.array(comparedRunSchema),
  fits: z.array(comparedFitSchema),
  /** True where there are more runs than are shown. */
  cut: z.boolean(),
});
export type CompareView = z.infer<typeof compareViewSchema>;

/** Distributions of several runs, each run counted once. Velocities in `unit`, densities in 1 / unit. */
export const pooledPdfSchema = z.object({
  population: z.string(),
  component: z.string(),
  scale: z.string(),
  unit: z.string(),
  /** Shortest and longest lag among the runs, s. */
  lags_s: z.object({ least: z.number(), most: z.number() }).nullable(),
  edges: z.array(z.number()),
  /** Mean over the runs, with the 95 % interval of that mean. */
  density: z.array(z.number()),
  low: list,
  high: list,
  /** Standard deviation between runs beyond what the errors of each explain. */
  between: list,
  runs: z.array(
    z.object({
      runId: z.uuid(),
      analysisId: z.uuid(),
      runName: z.string(),
      campaignName: z.string(),
      samples: z.int(),
      tracks: z.int(),
      lag_s: z.number(),
      /** One of the pooled unit in m/s. */
      scale_m_s: z.number(),
      density: z.array(z.number()),
    }),
  ),
  leftOut: z.array(z.object({ runId: z.uuid(), runName: z.string(), reason: z.string() })),
});
export type PooledPdfView = z.infer<typeof pooledPdfSchema>;

const series = z.object({ value: list, low: list, high: list });

/** Course over time and profiles across the channel of the runs of a selection. */
export const coursesSchema = z.object({
  runs: z.array(
    z.object({
      campaignName: z.string(),
      runId: z.uuid(),
      runName: z.string(),
      analysisId: z.uuid(),
      drive: z.string().nullable(),
      overTime: z.object({
        time_s: z.array(z.number()),
        trapped_m2: series,
        /** Null where no method can tell it. */
        density_m2: series.extend({ method: z.string() }).nullable(),
        kind: z.enum(['steady', 'growth', 'decay', 'unknown']),
        note: z.string(),
        /** The three forms of production fitted to what is plotted; empty where it is no transient of a driven flow. */
        forms: z.array(
          z.object({
            form: z.string(),
            deltaBic: z.number(),
            deltaAicc: z.number(),
            time_s: z.array(z.number()),
            /** Of the density, or of the trapped tracers where there is none. */
            value: z.array(z.number()),
          }),
        ),
        verdict: z.string().nullable(),
        chosen: z.string().nullable(),
      }),
      profiles: z
        .object({
          place_m: z.array(z.number()),
          fromWall: z.boolean(),
          freeAlong_m_s: series,
          trappedAlong_m_s: series,
          spots_m2: series,
          density_m2: series.nullable(),
        })
        .nullable(),
    }),
  ),
  /** Runs of the selection without an analysis that has these. */
  without: z.int(),
});
export type CoursesView = z.infer<typeof coursesSchema>;

export const savedSelectionSchema = z.object({
  ...itemFields,
  name: z.string(),
  /** Parameters of the address of the comparison. */
  filters: z.record(z.string(), z.string()),
  createdBy: personSchema.nullable(),
});
export type SavedSelectionView = z.infer<typeof savedSelectionSchema>;
