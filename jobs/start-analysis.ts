import type { Transaction } from 'sequelize';
import { codeVersion } from '@/lib/env';
import { LabError } from '@/lib/errors';
import { newId } from '@/lib/ids';
import { models } from '@/models';
import type { Analysis } from '@/models/analysis';
import type { Recording } from '@/models/recording';
import { checkRecipe, RecipeRangeError } from '@/tracking/recipe';
import type { Conditions, RecipeRequest } from '@/tracking/types';
import { chunkFramesFor } from './chunk-plan';

import { measureImageJob } from './measure-image';
import { enqueueJob } from './queue';

export interface AnalysisRequest {
  labId: string;
  recording: Pick<Recording, 'id' | 'state' | 'frames' | 'width' | 'height'>;
  /** Those of the run now; later edits of the run don't reach this analysis. */
  conditions: Conditions;
  recipeRequest: RecipeRequest;
  /** The saved recipe that the request came from. */
  recipeId?: string | null;
  userId: string | null;
  /** Frames per chunk; results don't depend on it. */
  chunkFrames?: number;
}

/**
 * Writes the analysis and asks for its first job in the caller's transaction.
 * @throws LabError STATE for a recording that is not ready, PARAM_RANGE for a recipe it can't be run with.
 */
export async function startAnalysis(request: AnalysisRequest, transaction: Transaction): Promise<Analysis> {
  const { labId, recording, conditions, recipeRequest } = request;
  const { frames, width, height } = recording;
  if (recording.state !== 'ready' || !frames || !width || !height) {
    throw new LabError('STATE', 'The recording is not ready: its stack must have been checked first.');
  }
  try {
    checkRecipe(recipeRequest, { frames, width, height });
  } catch (cause) {
    if (!(cause instanceof RecipeRangeError)) throw cause;
    const errors = [{ path: `recipe.${cause.field}`, message: cause.message }];
    throw new LabError('PARAM_RANGE', cause.message, { errors, cause });
  }
  const analysis = await models().Analysis.create(
    {
      id: newId(),
      labId,
      recordingId: recording.id,
      recipeId: request.recipeId ?? null,
      recipeRequest,
      conditions,
      state: 'waiting',
      stage: 'measure-image',
      frames,
      chunkFrames: request.chunkFrames ?? chunkFramesFor(frames, width, height),
      codeVersion: codeVersion(),
      createdBy: request.userId,
    },
    { transaction },
  );
  await enqueueJob(measureImageJob, { labId, subjectId: analysis.id, payload: {} }, transaction);
  return analysis;
}
