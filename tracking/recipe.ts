import type { Recipe, RecipeRequest } from './types';

/** The recipe's fields that are single numbers. */
export type NumericRecipeField = Exclude<keyof Recipe, 'effort' | 'lagsFrames'>;

interface Limit {
  least: number;
  most: number;
  /** True where only whole numbers make sense. */
  whole: boolean;
}

/** What a value may be at all; `checkRecipe` adds what the recording itself allows. */
export const RECIPE_LIMITS: Readonly<Record<NumericRecipeField, Limit>> = {
  spotSizePx: { least: 0.4, most: 10, whole: false },
  falseSpotsPerFrame: { least: 1e-6, most: 1000, whole: false },
  longestStepPx: { least: 0.5, most: 1000, whole: false },
  mayVanishFrames: { least: 0, most: 10, whole: true },
  shortestTrackFrames: { least: 1, most: 100_000, whole: true },
  gain: { least: 1e-9, most: 1e9, whole: false },
  readNoise_e: { least: 0, most: 10_000, whole: false },
  trappedFrom: { least: 0.51, most: 0.9999, whole: false },
  closestApproach_m: { least: 1e-9, most: 1, whole: false },
  falseDiscoveryRate: { least: 0.001, most: 1, whole: false },
  bootstrapDraws: { least: 100, most: 100_000, whole: true },
  seed: { least: 0, most: 4_294_967_295, whole: true },
};

/** A lag is a whole number of frames; the list is short since every lag is a table of its own. */
export const LAG_FRAMES_MOST = 1000;
export const LAGS_MOST = 16;

export const EFFORTS: readonly Recipe['effort'][] = ['full', 'quick'];

/**
 * Values of the fields that "auto" doesn't take from the recording itself.
 *
 * 0.1 false spots a frame costs hardly any true ones and, since false spots seldom repeat, hardly
 * any false track of three frames. 8 px is twice the fastest step of a well-planned recording. A
 * blink lasts a frame or two, the meeting of two tracers a little longer; beyond three frames a
 * tracer that comes back is more and more often another one.
 */
export const RECIPE_DEFAULTS: Readonly<
  Omit<Recipe, 'spotSizePx' | 'gain' | 'readNoise_e' | 'closestApproach_m'>
> = {
  falseSpotsPerFrame: 0.1,
  longestStepPx: 8,
  mayVanishFrames: 3,
  shortestTrackFrames: 3,
  effort: 'full',
  lagsFrames: [1, 2, 4, 8],
  trappedFrom: 0.9,
  falseDiscoveryRate: 0.1,
  bootstrapDraws: 1000,
  seed: 1,
};

/** Two images closer than about this many spot sizes start to merge; "auto" looks no closer. */
const CLOSEST_APPROACH_SPOT_SIZES = 4;

/** What "auto" needs to know; an `ImageModel` with `frames` and `pixelSizeM` beside it fits. */
export interface MeasuredRecording {
  spotSigmaPx: number;
  gainCountsPerE: number;
  readNoiseE: number;
  width: number;
  height: number;
  frames: number;
  pixelSizeM: number;
}

/** Names the field, the value and the bound of a recipe that can't be run. */
export class RecipeRangeError extends RangeError {
  constructor(
    readonly field: keyof Recipe,
    readonly received: unknown,
    readonly bound: string,
  ) {
    super(`${field} must be ${bound}. Received ${JSON.stringify(received) ?? String(received)}.`);
    this.name = 'RecipeRangeError';
  }
}

/**
 * Fills in every value that was left to the machine and checks the others.
 *
 * @throws RecipeRangeError naming field, value and bound.
 */
export function resolveRecipe(request: RecipeRequest, measured: MeasuredRecording): Recipe {
  checkRecipe(request, measured);
  const spotSizePx = given(request.spotSizePx) ?? clamp('spotSizePx', measured.spotSigmaPx);
  const { longestStepPx, mayVanishFrames, shortestTrackFrames } = RECIPE_DEFAULTS;
  return {
    spotSizePx,
    falseSpotsPerFrame: given(request.falseSpotsPerFrame) ?? RECIPE_DEFAULTS.falseSpotsPerFrame,
    longestStepPx:
      given(request.longestStepPx) ?? Math.min(longestStepPx, Math.max(measured.width, measured.height)),
    mayVanishFrames:
      given(request.mayVanishFrames) ?? Math.max(0, Math.min(mayVanishFrames, measured.frames - 2)),
    shortestTrackFrames:
      given(request.shortestTrackFrames) ?? Math.max(1, Math.min(shortestTrackFrames, measured.frames)),
    gain: given(request.gain) ?? clamp('gain', measured.gainCountsPerE),
    readNoise_e: given(request.readNoise_e) ?? clamp('readNoise_e', measured.readNoiseE),
    effort: given(request.effort) ?? RECIPE_DEFAULTS.effort,
    lagsFrames: [...(given(request.lagsFrames) ?? automaticLags(measured.frames))],
    trappedFrom: given(request.trappedFrom) ?? RECIPE_DEFAULTS.trappedFrom,
    closestApproach_m:
      given(request.closestApproach_m) ??
      clamp('closestApproach_m', CLOSEST_APPROACH_SPOT_SIZES * spotSizePx * measured.pixelSizeM),
    falseDiscoveryRate: given(request.falseDiscoveryRate) ?? RECIPE_DEFAULTS.falseDiscoveryRate,
    bootstrapDraws: given(request.bootstrapDraws) ?? RECIPE_DEFAULTS.bootstrapDraws,
    seed: given(request.seed) ?? RECIPE_DEFAULTS.seed,
  };
}

/**
 * Checks the values that a person gave, against the limits and against the recording they are for.
 *
 * @throws RecipeRangeError naming field, value and bound.
 */
export function checkRecipe(
  request: RecipeRequest,
  recording: Pick<MeasuredRecording, 'width' | 'height' | 'frames'>,
): void {
  for (const field of Object.keys(RECIPE_LIMITS) as NumericRecipeField[]) {
    const value = given(request[field]);
    if (value !== undefined) checkNumber(field, value);
  }
  const effort = given(request.effort);
  if (effort !== undefined && !EFFORTS.includes(effort)) {
    throw new RecipeRangeError('effort', effort, EFFORTS.join(' or '));
  }
  const lags = given(request.lagsFrames);
  if (lags !== undefined) checkLags(lags);

  const { width, height, frames } = recording;
  const atMost = (field: NumericRecipeField, most: number, why: string) => {
    const value = given(request[field]);
    if (value !== undefined && value > most)
      throw new RecipeRangeError(field, value, `at most ${most}, ${why}`);
  };
  atMost('longestStepPx', Math.max(width, height), 'the longer side of the image');
  atMost('spotSizePx', Math.min(width, height) / 8, 'an eighth of the shorter side of the image');
  atMost('shortestTrackFrames', frames, 'the frames of the recording');
  atMost('mayVanishFrames', Math.max(0, frames - 2), 'the frames of the recording less the two around a gap');
  const longestLag = lags === undefined ? 0 : Math.max(...lags);
  if (longestLag > Math.max(1, frames - 1)) {
    throw new RecipeRangeError(
      'lagsFrames',
      lags,
      `at most ${frames - 1} each, the frames of the recording less one`,
    );
  }
}

function checkNumber(field: NumericRecipeField, value: number): void {
  const { least, most, whole } = RECIPE_LIMITS[field];
  const kind = whole ? 'a whole number' : 'a number';
  if (typeof value === 'number' && value >= least && value <= most && (!whole || Number.isInteger(value)))
    return;
  throw new RecipeRangeError(field, value, `${kind} from ${least} to ${most}`);
}

function checkLags(lags: readonly number[]): void {
  const good =
    Array.isArray(lags) &&
    lags.length >= 1 &&
    lags.length <= LAGS_MOST &&
    new Set(lags).size === lags.length &&
    lags.every((lag) => Number.isInteger(lag) && lag >= 1 && lag <= LAG_FRAMES_MOST);
  if (good) return;
  const bound = `a list of 1 to ${LAGS_MOST} different whole numbers from 1 to ${LAG_FRAMES_MOST}`;
  throw new RecipeRangeError('lagsFrames', lags, bound);
}

function automaticLags(frames: number): number[] {
  const short = RECIPE_DEFAULTS.lagsFrames.filter((lag) => lag < frames);
  return short.length > 0 ? short : [1];
}

function given<T>(value: T | 'auto' | undefined | null): T | undefined {
  return value === 'auto' || value === undefined || value === null ? undefined : value;
}

/** Measured values are kept inside the limits, so that a strange recording still gets a recipe. */
function clamp(field: NumericRecipeField, value: number): number {
  const { least, most } = RECIPE_LIMITS[field];
  if (Number.isNaN(value)) return least;
  return Math.min(most, Math.max(least, value));
}
