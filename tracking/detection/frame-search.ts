import { blocksOfFrame } from '../image-model/background-of-frame';
import { createSpotFits } from '../kernels/create-spot-fits';
import { jointFitRoom } from '../kernels/joint-fit-memory';
import type { FrameKernels, Kernels } from '../kernels/kernels';
import type { Frame, ImageModel, Recipe } from '../types';
import { JOINT_SPOTS_MOST } from './fit-work';
import { createGroupFitter } from './group-fitter';
import { createSpotKernel } from './spot-kernel';
import { createSpotOrder } from './spot-order';
import { spotSizes } from './spot-sizes';
import { SpotTable } from './spot-table';
import { gainForLevel, levelForFalseMaxima } from './threshold';

/** Pixels within this many spot sizes of a spot take part in its fit. */
const FIT_REACH_SIGMAS = { full: 2.8, quick: 2.3 } as const;
/** A step this small leaves an error far below the standard error of any spot that is found; well below it. */
const STEP_DONE_PX = { full: 0.006, quick: 0.03 } as const;
/** Few fits move a spot farther than this. */
const MOVED_MOST_PX = 1;
/** Spots closer than this are fitted together. */
const TOGETHER_SIGMAS = 5;
/** The filter sees whole pixels only and weighs noise approximately; the fit then decides. */
const LEVEL_MARGIN = 0.7;
/** From this much above the level a lone spot needs no second opinion. */
const LEVEL_SURE = 2.5;
/** Pixels around a spot in which the second look can find another. */
const SECOND_LOOK_PIXELS_SIGMAS2 = 40;
/** With few spots the second look is as strict as if it looked at this share of the image. */
const SECOND_LOOK_SHARE = 0.1;
/** How far the background near a spot may differ from the model: a share of it and a floor, electrons. */
const OFFSET_SHARE = 0.1;
const OFFSET_LEAST_E = 0.5;

/** Looks for spots in one frame at a time; all arrays are reused. */
export interface FrameSearch {
  /** The frame at hand. */
  readonly pictures: FrameKernels;
  /** Its spots, indexed for neighbours within five spot sizes. */
  readonly table: SpotTable;
  /** @throws RangeError when the frame has another size than the model. */
  search(frame: Frame, frameIndex: number): void;
  /** Adds a spot begun at a place of the frame searched last, fitted with its neighbours; returns its number. */
  fitAt(xPx: number, yPx: number): number;
}

/**
 * Prepares a frame, proposes maxima of the filtered frame as spots and fits them in groups of neighbours.
 *
 * @param kernels what works on all pixels: plain or compiled
 */
export function createFrameSearch(model: ImageModel, recipe: Recipe, kernels: Kernels): FrameSearch {
  const { width, height, badPixels, backgroundE, offsetCounts, saturationCounts } = model;
  const pixels = width * height;
  const sigma = recipe.spotSizePx;
  const readVariance = recipe.readNoise_e * recipe.readNoise_e;
  const sizes = spotSizes(sigma, model.spotSigmaSpreadPx);
  const widest = sizes.sigmaPx[Math.min(sizes.sigmaPx.length - 1, sizes.typical + 2)];
  const reach = Math.max(2, Math.ceil(FIT_REACH_SIGMAS[recipe.effort] * widest));
  const level = levelForFalseMaxima(recipe.falseSpotsPerFrame, sigma, pixels);
  const peakLevel = level - LEVEL_MARGIN;
  const lookTwice = recipe.effort === 'full';

  const room = jointFitRoom(reach, createSpotKernel(sigma).reach, TOGETHER_SIGMAS * sigma);
  const pictures = kernels.forImages({ width, height, spotSigmaPx: sigma, scratchBytes: room.bytes });
  pictures.bad.set(badPixels);
  pictures.background.set(backgroundE);
  const { response } = pictures;
  const drift = model.backgroundDrift;
  const backgroundBlocks = new Float64Array(drift ? drift.columns * drift.rows : 0);
  const countScale = { offsetCounts, perCount: 1 / recipe.gain, saturationCounts };
  const stepDonePx = STEP_DONE_PX[recipe.effort];
  const fitsOptions = { width, height, spotSigmaPx: sigma, readVariance, reach, stepDonePx };
  const fits = createSpotFits(pictures, fitsOptions, room);
  const fitter = createGroupFitter({ ...fitsOptions, sizes, pictures }, fits);
  const table = new SpotTable();
  let refitted = new Uint8Array(256);
  const near = new Int32Array(64);
  const members = new Int32Array(JOINT_SPOTS_MOST);
  const order = createSpotOrder();

  /** Electrons, what can be used of them, and the frame in units of its noise. */
  const prepare = ({ counts }: Frame, frameIndex: number) => {
    if (drift) {
      blocksOfFrame(drift, frameIndex, backgroundBlocks);
      pictures.paintBackground(backgroundBlocks, drift);
    }
    pictures.setFrame(counts, countScale);
    pictures.respond(pictures.lightLevel(readVariance), readVariance, peakLevel);
  };

  const propose = () => {
    const peaks = pictures.findPeaks(peakLevel);
    table.count = 0;
    for (let k = 0; k < peaks.count; k++) {
      const at = peaks.at[k];
      const x = at % width;
      const y = (at - x) / width;
      const noise = Math.sqrt(pictures.bareAt(at) + readVariance);
      const brightness = (response[at] * noise) / pictures.kernel.squares;
      const subX = x + subPixel(at, 1, x, width);
      table.add(subX, y + subPixel(at, width, y, height), brightness, response[at], sizes.typical);
    }
  };

  /** Light is painted where others may see it: those whose boxes of pixels overlap, or who are fitted together. */
  const seenPx = Math.max(TOGETHER_SIGMAS * sigma, 2 * reach + MOVED_MOST_PX);
  /** From corner to corner. */
  const farthestSeenPx = Math.SQRT2 * seenPx;

  const ensurePainted = (i: number) => {
    if (table.unpainted[i] === 0 || table.alive[i] === 0) return;
    table.unpainted[i] = 0;
    fits.paint(table.x[i], table.y[i], table.n[i], sizes.sigmaPx[table.size[i]]);
  };

  /** Paints a spot and those around it if they see each other. */
  const paintIfSeen = (i: number) => {
    const found = table.near(i, farthestSeenPx, near);
    for (let m = 0; m < found; m++) {
      const j = near[m];
      if (Math.abs(table.x[i] - table.x[j]) > seenPx || Math.abs(table.y[i] - table.y[j]) > seenPx) continue;
      ensurePainted(i);
      ensurePainted(j);
    }
  };

  /** A second look sees as far as what it finds reaches: then all are painted. */
  const paintSeen = () => {
    for (let i = 0; i < table.count; i++) {
      if (lookTwice) ensurePainted(i);
      else paintIfSeen(i);
    }
  };

  /** Vertex of the parabola through the response at a maximum and its two neighbours along an axis. */
  const subPixel = (at: number, step: number, place: number, length: number): number => {
    if (place === 0 || place === length - 1) return 0;
    const before = response[at - step];
    const after = response[at + step];
    const bend = 2 * response[at] - before - after;
    return bend > 0 ? Math.max(-0.5, Math.min(0.5, (0.5 * (after - before)) / bend)) : 0;
  };

  /** Grows a group from its brightest spot by nearest neighbours, leaving room for one more. */
  const gather = (seed: number): number => {
    let count = 1;
    members[0] = seed;
    table.group[seed] = seed;
    // Nobody is near.
    if (table.unpainted[seed] === 1) return count;
    for (let k = 0; k < count && count < JOINT_SPOTS_MOST - 1; k++) {
      const found = table.near(members[k], TOGETHER_SIGMAS * sigma, near);
      for (let m = 0; m < found && count < JOINT_SPOTS_MOST - 1; m++) {
        const j = near[m];
        if (table.group[j] >= 0) continue;
        table.group[j] = seed;
        members[count++] = j;
      }
    }
    return count;
  };

  const setOffsetSpread = (i: number) => {
    const x = Math.max(0, Math.min(width - 1, Math.round(table.x[i])));
    const y = Math.max(0, Math.min(height - 1, Math.round(table.y[i])));
    fitter.setOffsetSpread(OFFSET_LEAST_E + OFFSET_SHARE * pictures.bareAt(y * width + x));
  };

  /** Twice the log-likelihood that noise at a spot's place gains as rarely as it exceeds the level. */
  const gainForNoise = (i: number): number => {
    const x = Math.max(0, Math.min(width - 1, Math.round(table.x[i])));
    const y = Math.max(0, Math.min(height - 1, Math.round(table.y[i])));
    return gainForLevel(level, sigma, pictures.bareAt(y * width + x), readVariance);
  };

  const fitGroups = () => {
    table.index(width, height, farthestSeenPx);
    paintSeen();
    const found = table.count;
    const lookLevel = levelForFalseMaxima(
      recipe.falseSpotsPerFrame,
      sigma,
      Math.min(
        pixels,
        Math.max(SECOND_LOOK_SHARE * pixels, found * SECOND_LOOK_PIXELS_SIGMAS2 * sigma * sigma),
      ),
    );
    const gainLeast = lookLevel * lookLevel;
    const byResponse = order.byResponse(table, found);
    if (sizes.sigmaPx.length > 1 && lookTwice) fitOnce(byResponse);
    for (let k = 0; k < found; k++) {
      const seed = byResponse[k];
      if (table.group[seed] >= 0 || table.alive[seed] === 0) continue;
      const count = gather(seed);
      for (let m = 0; m < count; m++) table.turn[members[m]] = k;
      setOffsetSpread(seed);
      // A lone faint maximum must gain the likelihood that the level stands for.
      const aloneLeast = table.response[seed] > level + LEVEL_SURE ? 0 : gainForNoise(seed);
      fitter.fit(table, members, count, lookTwice, aloneLeast, gainLeast);
    }
    if (lookTwice) refitNextToOthers();
  };

  /**
   * Fits all groups once, so that every spot has its size: what a wide one sheds around a spot of typical size
   * would be taken for one more spot by the neighbours, whose turn is earlier.
   */
  const fitOnce = (seeds: Int32Array) => {
    for (const seed of seeds) {
      if (table.group[seed] >= 0 || table.alive[seed] === 0) continue;
      const count = gather(seed);
      setOffsetSpread(seed);
      fitter.fit(table, members, count, false, 0, 0);
    }
    table.group.fill(-1, 0, table.count);
    table.index(width, height, farthestSeenPx);
  };

  /** Groups whose pixels hold light of groups that had their turn later are fitted again, now that those are known. */
  const refitNextToOthers = () => {
    table.index(width, height, farthestSeenPx);
    if (refitted.length < table.count) refitted = new Uint8Array(2 * table.count);
    refitted.fill(0, 0, table.count);
    for (let i = 0; i < table.count; i++) {
      if (table.alive[i] === 0 || refitted[i] === 1) continue;
      const found = table.near(i, 2 * reach + 1, near);
      let later = false;
      let count = 1;
      members[0] = i;
      for (let m = 0; m < found; m++) {
        const j = near[m];
        if (table.group[j] !== table.group[i]) later ||= table.turn[j] > table.turn[i];
        else if (count < JOINT_SPOTS_MOST) members[count++] = j;
      }
      if (!later) continue;
      for (let m = 0; m < count; m++) refitted[members[m]] = 1;
      setOffsetSpread(i);
      fitter.fit(table, members, count, false, 0, 0);
    }
  };

  const search = (frame: Frame, frameIndex: number) => {
    if (frame.width !== width || frame.height !== height) {
      throw new RangeError(
        `A frame of ${frame.width} x ${frame.height} px came when ${width} x ${height} were expected.`,
      );
    }
    prepare(frame, frameIndex);
    fits.clear();
    propose();
    fitGroups();
    table.index(width, height, TOGETHER_SIGMAS * sigma);
  };

  const fitAt: FrameSearch['fitAt'] = (xPx, yPx) => {
    const at = Math.round(yPx) * width + Math.round(xPx);
    const noise = Math.sqrt(pictures.bareAt(at) + readVariance);
    const seen = Math.max(response[at], 1);
    const light = (seen * noise) / pictures.kernel.squares;
    const i = table.add(xPx, yPx, light, response[at], sizes.typical);
    // Somebody sees it: it is not dropped as what likelihood alone would not have told from noise.
    table.toldApart[i] = 1;
    for (let k = 0; k < table.count; k++) ensurePainted(k);
    table.index(width, height, farthestSeenPx);
    table.group.fill(-1, 0, table.count);
    setOffsetSpread(i);
    fitter.fit(table, members, gather(i), false, 0, 0);
    return i;
  };
  return { pictures, table, search, fitAt };
}
