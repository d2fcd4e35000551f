import { assembleTracks, wholeTracks, type AssembledTracks } from './linking/assemble-tracks';
import { BRIGHTNESS_UNTOLD, measureBrightness } from './linking/brightness-statistics';
import type { LinkLimits } from './linking/link-limits';
import { linkPass } from './linking/link-pass';
import { linkInWindows } from './linking/link-windows';
import { firstStatistics, measureStatistics } from './linking/motion-statistics';
import { createSpotTable } from './linking/spot-table';
import { statisticsSample } from './linking/statistics-sample';
import { frameOfSpot, heldSpots, type SpotSource } from './spot-source';
import type { Recipe, Spots, Tracks } from './types';

/** What linking needs of a recipe. */
export type LinkRecipe = Pick<Recipe, 'longestStepPx' | 'mayVanishFrames' | 'shortestTrackFrames'> &
  Partial<Pick<Recipe, 'spotSizePx' | 'effort'>>;

/** Size of a tracer's image where the recipe doesn't say, px. */
const SPOT_SIZE_PX = 1.3;

/** Size of the recording that the spots are of. */
export interface RecordingSize {
  frames: number;
  width: number;
  height: number;
}

/**
 * Tracks from spots. Each frame is one assignment problem, solved exactly: which predicted tracer
 * owns which spot, priced against tracers being missed and spots being new or false. Links are
 * made twice: with wide assumptions (and, where tracers drift farther than they are apart, the
 * drift that displacements pile up at) to learn the mean flow, how each population moves and how
 * long brightness lasts, then with what was learned. After that pieces of tracks are joined and
 * close approaches of two tracks decided anew from both sides. With `effort` quick all tracers are
 * of one population, and pieces are joined but no approach is decided anew.
 *
 * A long recording is linked some frames at a time, with margins that overlap, so that working
 * memory does not grow with its length. The same spots give the same tracks, in order of first frame, then y, then x.
 *
 * @param spots of the whole recording, by frame, then y, then x.
 * @throws RangeError when spots are out of order or outside the recording's frames.
 */
export function linkSpots(spots: Spots, size: RecordingSize, recipe: LinkRecipe): Tracks {
  return wholeTracks(linkSource(heldSpots(spots, size.frames), size, recipe));
}

/**
 * The same for spots and tracks that are not held as a whole: a window of spots at a time is asked for, and tracks
 * are given out piece by piece. What is held for the whole recording are two numbers per spot, its links.
 */
export function linkSource(source: SpotSource, size: RecordingSize, recipe: LinkRecipe): AssembledTracks {
  if (!(recipe.longestStepPx > 0)) {
    throw new RangeError(`longestStepPx must be > 0. Received ${recipe.longestStepPx}.`);
  }
  const { count } = source;
  const limits: LinkLimits = {
    width: size.width,
    height: size.height,
    // A try-out has spots of a few frames only, and densities are per frame looked at.
    frames: count > 0 ? frameOfSpot(source, count - 1) - frameOfSpot(source, 0) + 1 : 1,
    longestStepPx: recipe.longestStepPx,
    mayVanishFrames: recipe.mayVanishFrames,
  };
  const quick = recipe.effort === 'quick';
  const known = { ...learn(statisticsSample(source), limits, quick), quick };
  const spotSizePx = recipe.spotSizePx ?? SPOT_SIZE_PX;
  const links = linkInWindows(source, limits, { ...known, spotSizePx });
  return assembleTracks(source, links, recipe.shortestTrackFrames);
}

/** How tracers of a sample move and how long their brightness lasts. */
function learn(sample: Spots, limits: LinkLimits, quick: boolean) {
  const assumed = firstStatistics(sample, limits);
  const rough = linkPass(createSpotTable(sample, BRIGHTNESS_UNTOLD), limits, assumed, BRIGHTNESS_UNTOLD);
  const motion = measureStatistics(sample, rough, limits, assumed, quick ? 1 : 2);
  return { motion, brightness: measureBrightness(sample, rough) };
}
