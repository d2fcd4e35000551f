import { z } from 'zod';
import { PLAN_BOUNDS, planFieldError, type PlanField } from '@/tracking/rehearsal/plan';
import { runConditionsSchema } from './conditions';
import { recipeRequestSchema } from './recipe';
import { nameSchema } from './text';

/** A number inside the bounds of the plan's field; the sentence names field, bounds and what was typed. */
function planNumber(field: PlanField) {
  const error = (issue: { input?: unknown }) =>
    planFieldError(field, issue.input) ?? 'This value can not be.';
  const { least, most } = PLAN_BOUNDS[field];
  return z
    .number({ error })
    .refine((value) => planFieldError(field, value) === null, { error })
    .meta({
      minimum: least,
      maximum: most,
    });
}

/** What is simulated or planted where nothing else is asked for. */
export const SCENE_DEFAULTS = {
  widthPx: 256,
  heightPx: 256,
  frames: 120,
  seeding_m2: 2e7,
  trappedShare: 0.6,
  brightness_e: 450,
  brightnessSpread: 0.45,
  meetings: 6,
} as const;

export const CAMERA_DEFAULTS = {
  spotSizePx: 1.2,
  background_e: 12,
  readNoise_e: 1.5,
  edgeLight: 0.5,
} as const;

export const REHEARSAL_SEED = 1;

export const rehearsalSceneSchema = z.strictObject({
  widthPx: planNumber('scene.widthPx').optional(),
  heightPx: planNumber('scene.heightPx').optional(),
  frames: planNumber('scene.frames').optional(),
  seeding_m2: planNumber('scene.seeding_m2').optional(),
  trappedShare: planNumber('scene.trappedShare').optional(),
  lineDensity_m2: planNumber('scene.lineDensity_m2').nullish(),
  brightness_e: planNumber('scene.brightness_e').nullish(),
  snr: planNumber('scene.snr').nullish(),
  brightnessSpread: planNumber('scene.brightnessSpread').optional(),
  meetings: planNumber('scene.meetings').optional(),
});

export const rehearsalCameraSchema = z.strictObject({
  spotSizePx: planNumber('camera.spotSizePx').optional(),
  background_e: planNumber('camera.background_e').optional(),
  readNoise_e: planNumber('camera.readNoise_e').optional(),
  edgeLight: planNumber('camera.edgeLight').optional(),
});

/**
 * A rehearsal as it is asked for. `simulated`: conditions of a run, typed in, or both (what is typed
 * wins). `planted`: particles in the frames of a recording, whose size, conditions and camera hold.
 */
export const rehearsalCreateSchema = z.strictObject({
  name: nameSchema,
  kind: z.enum(['simulated', 'planted'], 'kind must be simulated or planted.').default('simulated'),
  /** Run whose conditions are taken. */
  runId: z.uuid('runId must be an id.').optional(),
  conditions: runConditionsSchema.optional(),
  /** Recording in whose frames particles are planted. */
  recordingId: z.uuid('recordingId must be an id.').optional(),
  scene: rehearsalSceneSchema.optional(),
  camera: rehearsalCameraSchema.optional(),
  seed: planNumber('seed').optional(),
  recipe: recipeRequestSchema.optional(),
});
export type RehearsalCreate = z.infer<typeof rehearsalCreateSchema>;

/** What a person has typed so far, kept as it is: short texts by the name of their field. */
export const rehearsalDraftSchema = z.record(z.string().max(60), z.string().max(400)).refine((form) => Object.keys(form).length <= 120, 'At most 120 fields.'); // prettier-ignore
export type RehearsalDraft = z.infer<typeof rehearsalDraftSchema>;
