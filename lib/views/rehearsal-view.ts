import { z } from 'zod';
import { REHEARSAL_STAGES } from '../rehearsal-facts';
import { recipeRequestSchema } from '../schemas/recipe';
import { codedSchema, itemFields, personSchema } from './common';

const numberOrNull = z.number().nullable();

/** A rehearsal with its state and, once assessed, its headline. */
export const rehearsalViewSchema = z.object({
  ...itemFields,
  name: z.string(),
  kind: z.enum(['simulated', 'planted']),
  state: z.enum(['waiting', 'running', 'done', 'failed', 'stopped']),
  stage: z.enum(REHEARSAL_STAGES),
  /** 0..1 over all stages. */
  progress: z.number(),
  error: codedSchema.nullable(),
  /** Conditions, scene, camera and seed that it is made from, SI. */
  plan: z.record(z.string(), z.unknown()),
  recipe: recipeRequestSchema,
  /** Null until its frames are there. */
  recordingId: z.uuid().nullable(),
  /** Its first analysis. */
  analysisId: z.uuid().nullable(),
  /** Where particles were planted. */
  source: z.object({ recordingId: z.uuid(), name: z.string() }).nullable(),
  headline: z
    .object({ found: numberOrNull, alpha: numberOrNull, falsePerFrame: numberOrNull, changes: z.int() })
    .nullable(),
  createdBy: personSchema.nullable(),
  finishedAt: z.iso.datetime().nullable(),
});
export type RehearsalView = z.infer<typeof rehearsalViewSchema>;

const share = z.object({ value: numberOrNull, low: z.number(), high: z.number() });
const names = z.object({ trapped: z.int(), free: z.int(), undecided: z.int() });

/** The comparison of one analysis with the truth; null where the truth of it is not known. */
export const assessmentSchema = z.object({
  kind: z.enum(['simulated', 'planted']),
  detection: z.object({
    truePoints: z.int(),
    spots: z.int(),
    found: share,
    falseSpots: z.int().nullable(),
    falsePerFrame: numberOrNull,
    falseAskedPerFrame: z.number(),
    classes: z.array(
      z.object({
        lowE: z.number(),
        highE: z.number(),
        meanE: z.number(),
        snr: z.number(),
        truePoints: z.int(),
        found: share,
        isolated: z.int(),
        errorPx: numberOrNull,
        boundPx: numberOrNull,
        statedPx: numberOrNull,
      }),
    ),
    isolated: z.int(),
    errorPx: numberOrNull,
    boundPx: numberOrNull,
    statedPx: numberOrNull,
    errorOverStated: numberOrNull,
    missedCrowded: z.int(),
  }),
  tracks: z.object({
    trueTracks: z.int(),
    tracks: z.int(),
    alpha: numberOrNull,
    rmsePx: numberOrNull,
    beta: numberOrNull,
    jaccard: numberOrNull,
    jaccardTracks: numberOrNull,
    wrongLinkShare: numberOrNull,
    tracksPerTracer: numberOrNull,
  }),
  populations: z.object({
    trapped: names,
    free: names,
    nothing: names,
    balancedAccuracy: numberOrNull,
    undecidedShare: numberOrNull,
  }),
  events: z.object({
    events: z.array(
      z.object({
        t0S: z.number(),
        xPx: z.number(),
        yPx: z.number(),
        pointsBefore: z.int(),
        pointsAfter: z.int(),
        outcome: z.enum(['found', 'not accepted', 'no candidate']),
        candidate: z.int().nullable(),
        failed: z.array(z.string()),
      }),
    ),
    accepted: z.int(),
    acceptedTrue: z.int(),
    efficiency: share.nullable(),
    purity: share.nullable(),
  }),
  trueLineDensityM2: numberOrNull,
  estimates: z.array(
    z.object({
      method: z.string(),
      value: numberOrNull,
      low: numberOrNull,
      high: numberOrNull,
      ratio: numberOrNull,
      ratioLow: numberOrNull,
      ratioHigh: numberOrNull,
      coversTruth: z.boolean().nullable(),
      note: z.string(),
    }),
  ),
  advice: z.array(z.object({ about: z.string(), weight: z.enum(['change', 'know']), sentence: z.string() })),
});

/** A rehearsal with the comparison of each analysis of its recording, the newest first. */
export const rehearsalResultSchema = rehearsalViewSchema.extend({
  assessments: z.array(
    z.object({
      analysisId: z.uuid(),
      recipeName: z.string().nullable(),
      computedAt: z.iso.datetime(),
      codeVersion: z.string(),
      assessment: assessmentSchema,
    }),
  ),
});
export type RehearsalResult = z.infer<typeof rehearsalResultSchema>;
export type AssessmentView = z.infer<typeof assessmentSchema>;
