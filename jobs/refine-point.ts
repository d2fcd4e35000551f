import { LabError } from '@/lib/errors';
import type { RefinePointInput } from '@/lib/schemas/correction';
import type { RefinedPoint } from '@/lib/views/correction-view';
import { readMeasuredImage } from '@/models/queries/analysis-outcome';
import { selectRow } from '@/models/queries/select';
import { ComputeError } from './compute/compute-error';
import { ComputePool } from './compute/pool';
import { stackFolder } from './stack-folder';

/** A person waits with the pointer on the frame. */
const TIMEOUT_MS = 20_000;
const WAITING_MOST = 12;

const shared = globalThis as unknown as { beadlineRefinePool?: ComputePool };

/**
 * Where the tracer near a place in a frame is, with its standard errors: found by the detector of the
 * analysis, or fitted there where it was too faint to be found.
 * @throws LabError NOT_FOUND, NOT_COMPUTED; PARAM_RANGE outside the frames; INVALID where no light fits; BUSY
 */
export async function refinePoint(
  labId: string,
  analysisId: string,
  { frame, x_px, y_px }: RefinePointInput,
): Promise<RefinedPoint> {
  const row = await selectRow<{ recordingId: string; frames: number; width: number; height: number }>(
    `SELECT a.recording_id AS "recordingId", a.frames, g.width, g.height
     FROM analyses a JOIN recordings g ON g.id = a.recording_id WHERE a.lab_id = $1 AND a.id = $2`,
    [labId, analysisId],
  );
  if (!row) throw new LabError('NOT_FOUND', 'There is no such analysis in this laboratory.');
  const image = await readMeasuredImage(labId, analysisId);
  if (!image) throw new LabError('NOT_COMPUTED', 'The analysis has not measured its images yet.');
  if (frame >= row.frames) {
    throw outOfRange('frame', `The recording has frames 0 to ${row.frames - 1}. Received ${frame}.`);
  }
  const outside = `The point lies outside the image of ${row.width} x ${row.height} px.`;
  if (!(x_px >= -0.5 && x_px < row.width - 0.5)) throw outOfRange('x_px', outside);
  if (!(y_px >= -0.5 && y_px < row.height - 0.5)) throw outOfRange('y_px', outside);

  const pool = (shared.beadlineRefinePool ??= new ComputePool(1, { waitingMost: WAITING_MOST }));
  const input = {
    stackDir: stackFolder(row.recordingId),
    model: image.model,
    modelKey: analysisId,
    recipe: image.recipe,
    frame,
    xPx: x_px,
    yPx: y_px,
  };
  const { spot } = await pool
    .run('refinePoint', input, { timeoutMs: TIMEOUT_MS, key: analysisId })
    .catch((cause: unknown) => {
      if (cause instanceof ComputeError && (cause.code === 'BUSY' || cause.code === 'STOPPED')) {
        throw new LabError('BUSY', cause.message, { cause });
      }
      throw cause;
    });
  if (!spot) {
    throw new LabError(
      'INVALID',
      'No light of a tracer fits near this place: set the point by eye, without errors.',
    );
  }
  return {
    frame,
    x_px: spot.xPx,
    y_px: spot.yPx,
    sx_px: spot.sxPx,
    sy_px: spot.syPx,
    brightness: spot.brightness,
    snr: spot.snr,
    found: spot.found ? 'spot' : 'fit',
    movedPx: Math.hypot(spot.xPx - x_px, spot.yPx - y_px),
  };
}

/** Ends the child that refines points, for a clean stop. */
export async function closeRefinePool(): Promise<void> {
  await shared.beadlineRefinePool?.close();
  delete shared.beadlineRefinePool;
}

const outOfRange = (path: string, message: string) =>
  new LabError('PARAM_RANGE', message, { errors: [{ path, message }] });
