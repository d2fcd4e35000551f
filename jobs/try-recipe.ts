import { limit } from '@/lib/env';
import { LabError } from '@/lib/errors';
import type { TryOutView } from '@/lib/views/analysis-view';
import type { Conditions, RecipeRequest, Spots, Tracks } from '@/tracking/types';
import { ComputeError } from './compute/compute-error';
import { ComputePool } from './compute/pool';
import { stackPlace } from './stack-store';

/** A person waits for the answer; whatever takes longer than this is not a try-out. */
const TIMEOUT_MS = 60_000;
const WAITING_MOST = 6;

const shared = globalThis as unknown as { beadlineTryPool?: ComputePool };

export interface TryRequest {
  recordingId: string;
  /** At most 8. */
  frames: number[];
  recipe: RecipeRequest;
  conditions: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>;
}

/**
 * Tries a recipe on a few frames: spots of each, and short tracks where the frames follow each other.
 * Computed in a child process, at most two at once, never on the event loop of the caller.
 * @throws LabError PARAM_RANGE for a recipe that can't be run, BUSY when too many are waiting.
 */
export async function tryRecipe(
  { recordingId, frames, recipe, conditions }: TryRequest,
  { signal }: { signal?: AbortSignal } = {},
): Promise<TryOutView> {
  const began = performance.now();
  const pool = (shared.beadlineTryPool ??= new ComputePool(limit('tryOutsAtOnce'), {
    waitingMost: WAITING_MOST,
  }));
  const input = { stackDir: await stackPlace(recordingId), frames, request: recipe, conditions };
  const tried = await pool
    .run('tryRecipe', input, { signal, timeoutMs: TIMEOUT_MS, key: recordingId })
    .catch((cause: unknown) => {
      throw refusalOf(cause);
    });
  return {
    recipe: tried.recipe,
    imageFacts: tried.facts,
    frames: tried.frames.map(({ frame, noiseE, spots }) => ({
      frame,
      noise_e: noiseE,
      spots: plainSpots(spots),
    })),
    tracks: plainTracks(tried.tracks, frames),
    tookMs: Math.round(performance.now() - began),
  };
}

/** Ends the children of try-outs, for a clean stop. */
export async function closeTryPool(): Promise<void> {
  await shared.beadlineTryPool?.close();
  delete shared.beadlineTryPool;
}

function refusalOf(cause: unknown): unknown {
  if (!(cause instanceof ComputeError)) return cause;
  if (cause.code === 'RECIPE') {
    const errors = [{ path: `recipe.${cause.field ?? ''}`, message: cause.message }];
    return new LabError('PARAM_RANGE', cause.message, { errors, cause });
  }
  if (cause.code === 'BUSY' || cause.code === 'STOPPED')
    return new LabError('BUSY', cause.message, { cause });
  if (cause.code === 'TIMEOUT' || cause.code === 'MEMORY') {
    return new LabError('UNAVAILABLE', `${cause.message} Choose fewer frames.`, { cause });
  }
  return cause;
}

const rounded = (values: Float32Array, digits: number): number[] =>
  Array.from(values, (value) => (Number.isFinite(value) ? Number(value.toFixed(digits)) : 0));

function plainSpots(spots: Spots): TryOutView['frames'][number]['spots'] {
  return {
    x: rounded(spots.xPx, 3),
    y: rounded(spots.yPx, 3),
    sx: rounded(spots.sxPx, 4),
    sy: rounded(spots.syPx, 4),
    brightness: rounded(spots.brightness, 1),
    snr: rounded(spots.snr, 2),
    flags: Array.from(spots.flags),
  };
}

function plainTracks(tracks: Tracks, frames: readonly number[]): TryOutView['tracks'] {
  return {
    from: Math.min(...frames),
    to: Math.max(...frames),
    tracks: Array.from({ length: tracks.count }, (_, i) => i),
    population: new Array<null>(tracks.count).fill(null),
    pTrapped: new Array<null>(tracks.count).fill(null),
    start: Array.from(tracks.start),
    frame: Array.from(tracks.frame),
    x: rounded(tracks.xPx, 3),
    y: rounded(tracks.yPx, 3),
    flags: Array.from(tracks.flags),
  };
}
