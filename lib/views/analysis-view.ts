import { z } from 'zod';
import { REVIEW_STATES, VERDICTS } from '../review/verdict-words';
import { recipeRequestSchema } from '../schemas/recipe';
import { ANALYSIS_STAGES } from '../analysis-facts';
import { itemFields, personSchema, rehearsalMarkSchema } from './common';
import { detailsViewSchema } from './details-view';
import { motionViewSchema } from './motion-view';

const count = z.int();

export const analysisViewSchema = z.object({
  ...itemFields,
  recordingId: z.uuid(),
  recordingName: z.string(),
  runId: z.uuid(),
  campaignId: z.uuid(),
  /** The rehearsal that its recording was made for; null for what a camera took. */
  rehearsal: rehearsalMarkSchema.nullable(),
  state: z.enum(['waiting', 'running', 'done', 'failed', 'stopped']),
  stage: z.enum(ANALYSIS_STAGES),
  /** 0..1 over all stages. */
  progress: z.number(),
  /** Chunks of frames detected so far. */
  chunks: z.object({ done: count, total: count }),
  frames: count,
  /** Every value filled in once the image was measured; before that, as asked for. */
  recipe: recipeRequestSchema,
  recipeName: z.string().nullable(),
  conditions: z.record(z.string(), z.unknown()),
  imageFacts: z
    .object({
      gainCountsPerE: z.number(),
      offsetCounts: z.number(),
      readNoiseE: z.number(),
      spotSigmaPx: z.number(),
      /** Where tracers differ in size and each is fitted with its own. */
      spotSigmaSpreadPx: z.number().optional(),
      badPixels: count,
    })
    .nullable(),
  summary: z
    .object({
      spots: count,
      tracks: count,
      trackPoints: count,
      bridgedPoints: count,
      trapped: count,
      free: count,
      undecided: count,
      candidates: count,
      acceptedCandidates: count,
    })
    .nullable(),
  error: z.object({ code: z.string(), detail: z.string() }).nullable(),
  /** Corrections so far: the revision that the next one must name. */
  correctionsRevision: count,
  /** Since when the results are older than the tracks; null where they fit. */
  staleSince: z.iso.datetime().nullable(),
  signedOff: z
    .object({
      at: z.iso.datetime(),
      by: personSchema.nullable(),
      /** SHA-256 over everything that was signed off. */
      contentHash: z.string(),
    })
    .nullable(),
  codeVersion: z.string(),
  createdBy: personSchema.nullable(),
  startedAt: z.iso.datetime().nullable(),
  finishedAt: z.iso.datetime().nullable(),
});
export type AnalysisView = z.infer<typeof analysisViewSchema>;

/**
 * Tracks of a window of frames, for drawing. Points of track `i` are `start[i] .. start[i+1]-1`;
 * positions are px, flags those of tracking/types (16 = bridged, 32 = added and 64 = moved by a person).
 */
export const trackWindowSchema = z.object({
  /** Of the tracks; a try-out has none. */
  revision: count.optional(),
  from: count,
  to: count,
  tracks: z.array(count),
  /** 0 trapped, 1 free, 2 undecided, null not yet known. */
  population: z.array(count.nullable()),
  pTrapped: z.array(z.number().nullable()),
  /** First and last frame of each whole track; a try-out has none. */
  firstFrame: z.array(count).optional(),
  lastFrame: z.array(count).optional(),
  start: z.array(count),
  frame: z.array(count),
  x: z.array(z.number()),
  y: z.array(z.number()),
  flags: z.array(count),
  /** Numbers of the tracks that corrections made other than linking did. */
  changed: z.array(count).optional(),
  /** Populations that a person gave to stretches of tracks, frames included. */
  given: z.array(z.object({ track: count, from: count, to: count, population: count })).optional(),
});
export type TrackWindowView = z.infer<typeof trackWindowSchema>;

/** A row of the table of tracks. */
export const trackRowSchema = z.object({
  track: count,
  firstFrame: count,
  lastFrame: count,
  points: count,
  bridged: count,
  population: z.enum(['trapped', 'free', 'undecided']).nullable(),
  pTrapped: z.number().nullable(),
  meanSpeed_m_s: z.number().nullable(),
  x_px: z.number(),
  y_px: z.number(),
  brightness: z.number(),
  /** Corrections made it other than linking did. */
  changed: z.boolean(),
});
export type TrackRowView = z.infer<typeof trackRowSchema>;

const side = z.object({ points: count, amplitude: z.number().nullable(), amplitudeError: z.number().nullable(), exponent: z.number().nullable(), exponentError: z.number().nullable() }).nullable(); // prettier-ignore

export const candidateViewSchema = z.object({
  ...itemFields,
  analysisId: z.uuid(),
  event: count,
  trackA: count,
  trackB: count,
  t0_s: z.number(),
  t0Error_s: z.number().nullable(),
  x_px: z.number(),
  y_px: z.number(),
  minSeparation_m: z.number(),
  before: side,
  after: side,
  pChance: z.number().nullable(),
  qValue: z.number().nullable(),
  accepted: z.boolean(),
  /** What people settled; null while that is open, or kept from a reader. */
  verdict: z.enum(VERDICTS).nullable(),
  review: z.enum(REVIEW_STATES),
  /** What the viewer has said. */
  ownVerdict: z.enum(VERDICTS).nullable(),
  /** What it fails, in plain sentences. */
  failed: z.array(z.string()),
  series: z.object({
    frame: z.array(count),
    t_s: z.array(z.number()),
    separation_m: z.array(z.number()),
    error_m: z.array(z.number().nullable()),
    law_m: z.array(z.number().nullable()),
    flyBy_m: z.array(z.number().nullable()),
  }),
});
export type CandidateView = z.infer<typeof candidateViewSchema>;

const numberOrNull = z.number().nullable();

/** What the analysis page plots besides the tables: prepared series, thinned for the screen. */
export const measuresViewSchema = z.object({
  tracksRevision: count,
  computedAt: z.iso.datetime(),
  /** As tracking/measure-flow gives them, JSON-able. */
  populations: z.record(z.string(), z.unknown()),
  pdfs: z.array(
    z.object({
      population: z.enum(['trapped', 'free', 'undecided', 'all']),
      component: z.enum(['x', 'y', 'along', 'across', 'speed']),
      lagFrames: count,
      lag_s: z.number(),
      edges_m_s: z.array(z.number()),
      count: z.array(count),
      density_s_m: z.array(z.number()),
      low_s_m: z.array(numberOrNull),
      high_s_m: z.array(numberOrNull),
      samples: count,
      tracks: count,
      mean_m_s: numberOrNull,
      standardDeviation_m_s: numberOrNull,
      /** Standard deviation that localization alone would give. */
      noise_m_s: numberOrNull,
      /** Flatness less 3, localization noise included. */
      excessKurtosis: numberOrNull,
      /** Kernel estimate, straight between its places; null where there is none, as in analyses older than it. */
      kernel: z
        .object({
          /** Standard deviation of the kernel where samples are dense, and the independent samples that set it. */
          width_m_s: z.number(),
          independentSamples: count,
          at_m_s: z.array(z.number()),
          density_s_m: z.array(z.number()),
          /** Few samples lie beyond these. */
          toldFrom_m_s: z.number(),
          toldTo_m_s: z.number(),
        })
        .nullable(),
    }),
  ),
  estimates: z.array(
    z.object({
      quantity: z.string(),
      unit: z.string(),
      method: z.string(),
      value: numberOrNull,
      low: numberOrNull,
      high: numberOrNull,
      level: z.number(),
      inputs: z.record(
        z.string(),
        z.object({ value: z.union([z.number(), z.string(), z.null()]), unit: z.string() }),
      ),
      note: z.string(),
    }),
  ),
  /** Null for an analysis that was measured before there was such a measure. */
  motion: motionViewSchema.nullable(),
  details: detailsViewSchema.nullable(),
  spotsPerFrame: z.array(count),
});
export type MeasuresView = z.infer<typeof measuresViewSchema>;

/** Answer of a try-out. */
export const tryOutViewSchema = z.object({
  recipe: recipeRequestSchema,
  imageFacts: z.object({
    gainCountsPerE: z.number(),
    offsetCounts: z.number(),
    readNoiseE: z.number(),
    spotSigmaPx: z.number(),
    spotSigmaSpreadPx: z.number().optional(),
    badPixels: count,
  }),
  frames: z.array(
    z.object({
      frame: count,
      /** Background noise, electrons r.m.s. */
      noise_e: z.number(),
      spots: z.object({
        x: z.array(z.number()),
        y: z.array(z.number()),
        sx: z.array(z.number()),
        sy: z.array(z.number()),
        brightness: z.array(z.number()),
        snr: z.array(z.number()),
        flags: z.array(count),
      }),
    }),
  ),
  /** Short tracks over consecutive chosen frames. */
  tracks: trackWindowSchema,
  tookMs: z.number(),
});
export type TryOutView = z.infer<typeof tryOutViewSchema>;
