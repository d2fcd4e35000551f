import { assertMayTo, type Viewer } from '@/auth/viewer';
import type { RequestKey } from '@/auth/idempotency';
import { countRequest } from '@/auth/rate-limit';
import { startAnalysis } from '@/jobs/start-analysis';
import { stopAnalysis } from '@/jobs/stop-analysis';
import { LabError, notFound } from '@/lib/errors';
import type { AnalysisView } from '@/lib/views/analysis-view';
import { models } from '@/models';
import { getSequelize } from '@/models/database';
import { getAnalysis } from '@/models/queries/analyses';
import { getRecipe } from '@/models/queries/recipes';
import { makersOfRecording } from '@/models/queries/recordings';
import { conditionsOfRun } from '@/models/queries/run-conditions';
import { writeAudit } from '@/models/queries/write-audit';
import type { Recording } from '@/models/recording';
import type { Conditions, RecipeRequest } from '@/tracking/types';

/** A recording that can be computed on, with the conditions of its run. */
export interface Computable {
  recording: Recording;
  conditions: Conditions;
}

/**
 * @throws LabError NOT_FOUND; STATE for a recording that is not ready or removed; CONDITIONS_MISSING
 *   while pixel size or frame interval are not known.
 */
export async function computableRecording(labId: string, recordingId: string): Promise<Computable> {
  const recording = await models().Recording.findOne({ where: { id: recordingId, labId } });
  if (!recording) throw notFound('recording');
  const run = await models().Run.findOne({ where: { id: recording.runId, labId } });
  if (!run) throw notFound('recording');
  if (recording.deletedAt) throw new LabError('STATE', 'This recording was removed. Restore it first.');
  if (recording.state !== 'ready') {
    throw new LabError('STATE', `The recording is not ready: it is ${recording.state}.`);
  }
  const conditions = conditionsOfRun(run);
  if (!conditions) {
    const missing = [run.pixelSizeM ?? 'pixelSize_m', run.frameIntervalS ?? 'frameInterval_s'].filter(
      (name) => typeof name === 'string',
    );
    const errors = missing.map((path) => ({ path, message: 'Enter it in the run.' }));
    const detail =
      'Enter pixel size and frame interval of the run first: lengths and speeds follow from them.';
    throw new LabError('CONDITIONS_MISSING', detail, { errors });
  }
  return { recording, conditions };
}

export interface AnalysisInput {
  recipe?: RecipeRequest;
  recipeId?: string;
}

/** Starts an analysis of a recording with a recipe in full, a saved one, or everything left to the machine. */
export async function startAnalysisOf(
  viewer: Viewer,
  recordingId: string,
  { recipe, recipeId }: AnalysisInput,
  key: RequestKey | null = null,
): Promise<AnalysisView> {
  const { labId, userId } = viewer;
  if (key?.madeBefore) return getAnalysis(labId, key.madeBefore);
  const { recording, conditions } = await computableRecording(labId, recordingId);
  if (recipe && recipeId) {
    const errors = [{ path: 'recipeId', message: 'Send a recipe or the id of one, not both.' }];
    throw new LabError('INVALID', errors[0].message, { errors });
  }
  const saved = recipeId ? await getRecipe(labId, recipeId) : null;
  await countRequest(userId, 'analysesPerHour');
  const id = await getSequelize().transaction(async (transaction) => {
    const recipeRequest = saved?.fields ?? recipe ?? {};
    const request = { labId, recording, conditions, recipeRequest, recipeId: saved?.id ?? null, userId };
    const analysis = await startAnalysis(request, transaction);
    await key?.remember(analysis.id, transaction);
    await writeAudit(
      { labId, userId, action: 'analysis.started', subjectKind: 'analysis', subjectId: analysis.id },
      transaction,
    );
    return analysis.id;
  });
  return getAnalysis(labId, id);
}

/** Stops an analysis: one's own, or any where the role allows it. */
export async function stopAnalysisOf(viewer: Viewer, analysisId: string): Promise<AnalysisView> {
  const { labId, userId } = viewer;
  const analysis = await models().Analysis.findOne({
    where: { id: analysisId, labId },
    attributes: { exclude: ['imageModel'] },
  });
  if (!analysis) throw notFound('analysis');
  const makers = await makersOfRecording(labId, analysis.recordingId);
  assertMayTo(viewer, 'stop-analysis', [analysis.createdBy, ...makers]);
  await getSequelize().transaction(async (transaction) => {
    await stopAnalysis(analysis, transaction);
    const entry = {
      labId,
      userId,
      action: 'analysis.stopped',
      subjectKind: 'analysis',
      subjectId: analysisId,
    };
    await writeAudit(entry, transaction);
  });
  return getAnalysis(labId, analysisId);
}
