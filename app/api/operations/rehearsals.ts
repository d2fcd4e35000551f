import { assertDiskHasRoom } from '@/app/api/uploads/room-for';
import { countRequest } from '@/auth/rate-limit';
import { assertMayTo, type Viewer } from '@/auth/viewer';
import { startRehearsal } from '@/jobs/start-rehearsal';
import { stopRehearsal } from '@/jobs/stop-rehearsal';
import { LabError } from '@/lib/errors';
import { conditionsOfView } from '@/lib/run-form/conditions-of-view';
import type { RunConditionsInput } from '@/lib/schemas/conditions';
import {
  CAMERA_DEFAULTS,
  REHEARSAL_SEED,
  SCENE_DEFAULTS,
  type RehearsalCreate,
} from '@/lib/schemas/rehearsal';
import type { RehearsalView } from '@/lib/views/rehearsal-view';
import { getSequelize } from '@/models/database';
import { assertWithinQuota } from '@/models/queries/quota';
import { getRecording } from '@/models/queries/recordings';
import { dropDraft } from '@/models/queries/rehearsal-drafts';
import { getRehearsal } from '@/models/queries/rehearsals';
import { removeRehearsal } from '@/models/queries/remove-rehearsal';
import { getRun } from '@/models/queries/runs';
import { writeAudit } from '@/models/queries/write-audit';
import { checkRecipe, RecipeRangeError } from '@/tracking/recipe';
import { cameraOf, tangleOf } from '@/tracking/rehearsal/make-scene';
import { PlanRangeError, type RehearsalPlan } from '@/tracking/rehearsal/plan';
import type { RunConditions } from '@/tracking/flow/run-conditions';

/** Bytes of a pixel of a made stack. */
const PIXEL_BYTES = 2;

/**
 * Starts a rehearsal: its plan is checked whole before anything is written.
 * @throws LabError NOT_FOUND for a run or recording that isn't there, CONDITIONS_MISSING, PARAM_RANGE
 *   naming the field, STATE for a recording that particles can't be planted in, STORAGE_FULL
 */
export async function startRehearsalOf(viewer: Viewer, input: RehearsalCreate): Promise<RehearsalView> {
  const { labId, userId } = viewer;
  const plan = input.kind === 'planted' ? await plantedPlan(labId, input) : await simulatedPlan(labId, input);
  const recipe = input.recipe ?? {};
  assertMakes(plan, recipe);
  const { widthPx, heightPx, frames } = plan.scene;
  const bytes = PIXEL_BYTES * widthPx * heightPx * frames;
  await assertDiskHasRoom(bytes);
  await countRequest(userId, 'analysesPerHour');
  const id = await getSequelize().transaction(async (transaction) => {
    await assertWithinQuota(labId, bytes, transaction);
    const { name, kind } = input;
    const sourceRecordingId = kind === 'planted' ? (input.recordingId ?? null) : null;
    const made = await startRehearsal({ labId, userId, name, kind, plan, recipe, sourceRecordingId }, transaction); // prettier-ignore
    const entry = { action: 'rehearsal.made', subjectKind: 'rehearsal', subjectId: made, detail: { kind } };
    await writeAudit({ labId, userId, ...entry }, transaction);
    await dropDraft(labId, userId, transaction);
    return made;
  });
  return getRehearsal(labId, id);
}

async function simulatedPlan(labId: string, input: RehearsalCreate): Promise<RehearsalPlan> {
  if (input.recordingId) {
    throw refused('recordingId', 'A recording is named for planted particles only: kind must be planted.');
  }
  const run = input.runId ? conditionsOfView(await getRun(labId, input.runId)) : {};
  const typed = Object.entries(input.conditions ?? {}).filter(([, value]) => value !== undefined);
  return {
    conditions: complete({ ...run, ...Object.fromEntries(typed) }),
    scene: sceneOf(input, SCENE_DEFAULTS),
    camera: { ...CAMERA_DEFAULTS, ...input.camera },
    seed: input.seed ?? REHEARSAL_SEED,
  };
}

async function plantedPlan(labId: string, input: RehearsalCreate): Promise<RehearsalPlan> {
  if (!input.recordingId) throw refused('recordingId', 'Name the recording in which particles are planted.');
  if (input.camera || input.conditions || input.runId) {
    const path = input.camera ? 'camera' : input.conditions ? 'conditions' : 'runId';
    throw refused(path, 'Camera and conditions of planted particles are those of the recording: leave them out.'); // prettier-ignore
  }
  const recording = await getRecording(labId, input.recordingId);
  const { width, height, frames, bitDepth } = recording;
  if (recording.deletedAt) throw new LabError('STATE', 'This recording was removed. Restore it first.');
  if (recording.rehearsal) {
    throw new LabError('STATE', 'This recording was made for a rehearsal: plant in one that a camera took.');
  }
  if (recording.state !== 'ready' || !width || !height || !frames) {
    throw new LabError('STATE', `The recording is not ready: it is ${recording.state}.`);
  }
  if (!bitDepth || bitDepth > 16) {
    throw new LabError('STATE', `Particles can be planted in whole counts of at most 16 bits; this recording has ${bitDepth ?? 'unknown'} bits.`); // prettier-ignore
  }
  for (const field of ['widthPx', 'heightPx', 'frames'] as const) {
    if (input.scene?.[field] !== undefined) throw refused(`scene.${field}`, 'Size and number of frames are those of the recording: leave them out.'); // prettier-ignore
  }
  const scene = sceneOf(input, { ...SCENE_DEFAULTS, widthPx: width, heightPx: height, frames });
  return {
    conditions: complete(conditionsOfView(await getRun(labId, recording.runId))),
    scene,
    camera: null,
    seed: input.seed ?? REHEARSAL_SEED,
  };
}

type SceneBase = { [K in keyof typeof SCENE_DEFAULTS]: number };

function sceneOf({ scene = {} }: RehearsalCreate, usual: SceneBase): RehearsalPlan['scene'] {
  const given = Object.fromEntries(Object.entries(scene).filter(([, value]) => value !== undefined));
  const byDefault = scene.brightness_e == null && scene.snr == null;
  return {
    ...usual,
    ...given,
    lineDensity_m2: scene.lineDensity_m2 ?? null,
    brightness_e: byDefault ? SCENE_DEFAULTS.brightness_e : (scene.brightness_e ?? null),
    snr: scene.snr ?? null,
  };
}

function complete(conditions: RunConditionsInput): RehearsalPlan['conditions'] {
  const { pixelSize_m, frameInterval_s } = conditions;
  if (pixelSize_m && frameInterval_s)
    return { ...(conditions as RunConditions), pixelSize_m, frameInterval_s };
  const errors = [
    ...(pixelSize_m ? [] : [{ path: 'pixelSize_m', message: 'Enter the pixel size.' }]),
    ...(frameInterval_s ? [] : [{ path: 'frameInterval_s', message: 'Enter the frame rate.' }]),
  ];
  throw new LabError('CONDITIONS_MISSING', 'Enter pixel size and frame rate: lengths and speeds follow from them.', { errors }); // prettier-ignore
}

/** Asks the simulator and the recipe themselves, so that nothing is refused later that could be refused now. */
function assertMakes(plan: RehearsalPlan, recipe: NonNullable<RehearsalCreate['recipe']>): void {
  const { widthPx: width, heightPx: height, frames } = plan.scene;
  try {
    // What the camera of a recording is like comes out later; how much there is to make does not depend on it.
    tangleOf(plan, plan.camera ? cameraOf(plan) : { backgroundE: 1, readNoiseE: 1, spotSigmaPx: 1 });
    checkRecipe(recipe, { width, height, frames });
  } catch (cause) {
    if (cause instanceof PlanRangeError) throw refused(cause.field, cause.message, cause);
    if (cause instanceof RecipeRangeError) throw refused(`recipe.${cause.field}`, cause.message, cause);
    throw cause;
  }
}

const refused = (path: string, message: string, cause?: unknown): LabError =>
  new LabError('PARAM_RANGE', message, { errors: [{ path, message }], cause });

/** Stops a rehearsal: one's own, or any where the role allows it. */
export async function stopRehearsalOf(viewer: Viewer, id: string): Promise<RehearsalView> {
  const { labId, userId } = viewer;
  const { createdBy } = await getRehearsal(labId, id);
  assertMayTo(viewer, 'stop-analysis', [createdBy?.id ?? null]);
  await stopRehearsal(
    labId,
    id,
    (transaction) =>
    writeAudit({ labId, userId, action: 'rehearsal.stopped', subjectKind: 'rehearsal', subjectId: id }, transaction), // prettier-ignore
  );
  return getRehearsal(labId, id);
}

/** Removes a rehearsal that has ended, with its recording: both can be made again from the plan. */
export async function removeRehearsalOf(viewer: Viewer, id: string): Promise<void> {
  const { labId, userId } = viewer;
  const { createdBy, state } = await getRehearsal(labId, id);
  assertMayTo(viewer, 'remove-rehearsal', [createdBy?.id ?? null]);
  if (state === 'waiting' || state === 'running') throw new LabError('STATE', 'Stop the rehearsal first.');
  await getSequelize().transaction(async (transaction) => {
    await removeRehearsal(labId, id, transaction);
    await writeAudit({ labId, userId, action: 'rehearsal.removed', subjectKind: 'rehearsal', subjectId: id }, transaction); // prettier-ignore
  });
}
