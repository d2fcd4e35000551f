import { assembleTracks } from './linking/assemble-tracks';
import { BRIGHTNESS_UNTOLD, measureBrightness } from './linking/brightness-statistics';
import { joinPieces } from './linking/join-pieces';
import type { LinkLimits } from './linking/link-limits';
import { linkPass } from './linking/link-pass';
import { firstStatistics, measureStatistics } from './linking/motion-statistics';
import { createSpotTable } from './linking/spot-table';
import { statisticsSample } from './linking/statistics-sample';
import { trackLinks } from './linking/track-links';
import { untangle } from './linking/untangle';
import type { Recipe, Spots, Tracks } from './types';

/** What linking needs of a recipe. */
export type LinkRecipe = Pick<Recipe, 'longestStepPx' | 'mayVanishFrames' | 'shortestTrackFrames'> &
  Partial<Pick<Recipe, 'spotSizePx'>>;

/** A second look at close approaches knows what the first one untangled; a third changes next to nothing. */
const ROUNDS = 2;
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
 * made twice: with wide assumptions to learn how the tracers of this recording move and how long
 * their brightness lasts, then with what was learned. After that pieces of tracks are joined and
 * close approaches of two tracks decided anew from both sides. The same spots give the same tracks, in order of first frame, then y, then x.
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
  const sample = statisticsSample(spots);
  const rough = linkPass(
    createSpotTable(sample, BRIGHTNESS_UNTOLD),
    limits,
    firstStatistics(spots, limits),
    BRIGHTNESS_UNTOLD,
  );
  const motion = measureStatistics(sample, rough, limits);
  const brightness = measureBrightness(sample, rough);
  const table = createSpotTable(spots, brightness);
  const links = trackLinks(linkPass(table, limits, motion, brightness));
  for (let round = 0; round < ROUNDS; round++) {
    joinPieces(table, links, limits, motion, brightness);
    untangle(table, links, limits, motion, brightness, recipe.spotSizePx ?? SPOT_SIZE_PX, round > 0);
  }
  joinPieces(table, links, limits, motion, brightness);
  return assembleTracks(spots, links.before, recipe.shortestTrackFrames);
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
