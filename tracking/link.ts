import { assembleTracks } from './linking/assemble-tracks';
import { BRIGHTNESS_UNTOLD, measureBrightness } from './linking/brightness-statistics';
import type { LinkLimits } from './linking/link-limits';
import { linkPass } from './linking/link-pass';
import { linkInWindows } from './linking/link-windows';
import { firstStatistics, measureStatistics } from './linking/motion-statistics';
import { createSpotTable } from './linking/spot-table';
import { statisticsSample } from './linking/statistics-sample';
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
  checkOrder(spots, size.frames);
  if (!(recipe.longestStepPx > 0)) {
    throw new RangeError(`longestStepPx must be > 0. Received ${recipe.longestStepPx}.`);
  }
  const limits: LinkLimits = {
    width: size.width,
    height: size.height,
    // A try-out has spots of a few frames only, and densities are per frame looked at.
    frames: spots.count > 0 ? spots.frame[spots.count - 1] - spots.frame[0] + 1 : 1,
    longestStepPx: recipe.longestStepPx,
    mayVanishFrames: recipe.mayVanishFrames,
  };
  const quick = recipe.effort === 'quick';
  const sample = statisticsSample(spots);
  const assumed = firstStatistics(sample, limits);
  const rough = linkPass(createSpotTable(sample, BRIGHTNESS_UNTOLD), limits, assumed, BRIGHTNESS_UNTOLD);
  const motion = measureStatistics(sample, rough, limits, assumed, quick ? 1 : 2);
  const brightness = measureBrightness(sample, rough);
  const spotSizePx = recipe.spotSizePx ?? SPOT_SIZE_PX;
  const links = linkInWindows(spots, limits, { motion, brightness, spotSizePx, quick });
  return assembleTracks(spots, links, recipe.shortestTrackFrames);
}

function checkOrder(spots: Spots, frames: number): void {
  for (let s = 1; s < spots.count; s++) {
    if (spots.frame[s] < spots.frame[s - 1]) {
      throw new RangeError(
        `Spots of frame ${spots.frame[s]} came after those of frame ${spots.frame[s - 1]}.`,
      );
    }
  }
  const last = spots.count > 0 ? spots.frame[spots.count - 1] : 0;
  if (spots.count > 0 && last >= frames) {
    throw new RangeError(`A spot is in frame ${last}, but the recording has ${frames} frames.`);
  }
}
