import { z } from 'zod';
import {
  EFFORTS,
  LAG_FRAMES_MOST,
  LAGS_MOST,
  RECIPE_LIMITS,
  type NumericRecipeField,
} from '@/tracking/recipe';
import { nameSchema, noteSchema } from './text';

const auto = z.literal('auto');

function numberOrAuto(field: NumericRecipeField) {
  const { least, most, whole } = RECIPE_LIMITS[field];
  const error = (issue: { input?: unknown }) =>
    `${field} must be ${whole ? 'a whole number' : 'a number'} from ${least} to ${most}, or "auto" (you typed '${String(issue.input).slice(0, 40)}').`;
  const number = whole ? z.int({ error }) : z.number({ error });
  return z.union([number.gte(least, { error }).lte(most, { error }), auto], { error }).optional();
}

const lag = z.int().min(1).max(LAG_FRAMES_MOST);
const lagsError = `lagsFrames must be a list of 1 to ${LAGS_MOST} different whole numbers from 1 to ${LAG_FRAMES_MOST}, or "auto".`;
const lags = z
  .array(lag)
  .min(1)
  .max(LAGS_MOST)
  .refine((list) => new Set(list).size === list.length, lagsError);

/** A recipe as people and scripts write it: any field may be left out or be "auto". */
export const recipeRequestSchema = z.strictObject({
  spotSizePx: numberOrAuto('spotSizePx'),
  falseSpotsPerFrame: numberOrAuto('falseSpotsPerFrame'),
  longestStepPx: numberOrAuto('longestStepPx'),
  mayVanishFrames: numberOrAuto('mayVanishFrames'),
  shortestTrackFrames: numberOrAuto('shortestTrackFrames'),
  gain: numberOrAuto('gain'),
  readNoise_e: numberOrAuto('readNoise_e'),
  effort: z
    .union([z.enum(EFFORTS as ['full', 'quick']), auto], `effort must be ${EFFORTS.join(' or ')}, or "auto".`)
    .optional(),
  lagsFrames: z.union([lags, auto], lagsError).optional(),
  trappedFrom: numberOrAuto('trappedFrom'),
  closestApproach_m: numberOrAuto('closestApproach_m'),
  falseDiscoveryRate: numberOrAuto('falseDiscoveryRate'),
  bootstrapDraws: numberOrAuto('bootstrapDraws'),
  seed: numberOrAuto('seed'),
});

export const recipeCreateSchema = z.strictObject({
  name: nameSchema,
  note: noteSchema.nullish(),
  fields: recipeRequestSchema,
});

/** What starts an analysis: a recipe in full, or the id of a saved one. */
export const analysisCreateSchema = z.strictObject({
  recipe: recipeRequestSchema.optional(),
  recipeId: z.uuid().optional(),
});

/** Frames to look at and the recipe to try on them. */
export const tryRecipeSchema = z.strictObject({
  frames: z.array(z.int().min(0)).min(1, 'Choose at least one frame.').max(8, 'At most 8 frames.'),
  recipe: recipeRequestSchema.optional(),
});
