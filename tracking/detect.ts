import { createGroupFitter } from './detection/group-fitter';
import { JOINT_SPOTS_MOST } from './detection/fit-work';
import { createSpotKernel } from './detection/spot-kernel';
import { createSpotOrder } from './detection/spot-order';
import { spotSizes } from './detection/spot-sizes';
import { SpotTable } from './detection/spot-table';
import { statedError } from './detection/stated-error';
import { gainForLevel, levelForFalseMaxima } from './detection/threshold';
import { createSpotFits } from './kernels/create-spot-fits';
import { jointFitRoom } from './kernels/joint-fit-memory';
import type { Kernels } from './kernels/kernels';
import { plainKernels } from './kernels/plain-kernels';
import { blocksOfFrame } from './image-model/background-of-frame';
import type { SpotSink } from './spots';
import {
  SPOT_EDGE,
  SPOT_ELONGATED,
  SPOT_OVERLAP,
  SPOT_SATURATED,
  type Frame,
  type ImageModel,
  type Recipe,
} from './types';

/** Pixels within this many spot sizes of a spot take part in its fit. */
const FIT_REACH_SIGMAS = { full: 2.8, quick: 2.3 } as const;
/** A step this small leaves an error far below the standard error of any spot that is found; well below it. */
const STEP_DONE_PX = { full: 0.006, quick: 0.03 } as const;
/** Spots closer than this are fitted together. */
const TOGETHER_SIGMAS = 5;
/** Spots closer than this are flagged as overlapping. */
const OVERLAP_SIGMAS = 3.5;
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
/** Score of elongation that marks a spot: noise exceeds it 6 times in 10,000 (chi-squared, 2 degrees of freedom). */
const ELONGATION_FLAGGED = 15;

/** Finds the spots of single frames; what it finds depends on the frame and the model alone. */
export interface Detector {
  /** Appends the spots of a frame to the sink, by y, then x. */
  detect(frame: Frame, frameIndex: number, sink: SpotSink): void;
  /**
   * The spot that a person points to: the nearest one that is found within `reachPx`; else, where the
   * frame holds light that was too faint to be found, the same fit begun at the place, together with
   * its neighbours. Null where no light fits there within `reachPx`.
   */
  placeAt(frame: Frame, frameIndex: number, xPx: number, yPx: number, reachPx: number): PlacedSpot | null;
}

/** A spot at a place that was asked for. */
export interface PlacedSpot {
  xPx: number;
  yPx: number;
  /** Standard errors of the position, px. */
  sxPx: number;
  syPx: number;
  /** Photoelectrons. */
  brightness: number;
  /** Matched-filter response in units of the local noise. */
  snr: number;
  /** Whether the detector finds it by itself. */
  found: boolean;
}

/** Light that a person points to counts from this many of its standard errors on. */
const POINTED_SIGMAS_LEAST = 2;

/**
 * Spots as a test of hypotheses: the frame in units of its own noise is correlated with the spot's
 * shape; maxima above the level that noise alone exceeds `falseSpotsPerFrame` times are fitted by
 * maximum likelihood, neighbours together; in what remains a second look asks whether one more
 * spot gains enough likelihood. Standard errors come from the Fisher information of the joint fit.
 *
 * @param kernels what works on all pixels: plain or compiled
 * @throws RangeError when a frame has another size than the model.
 */
export function createDetector(model: ImageModel, recipe: Recipe, kernels: Kernels = plainKernels): Detector {
  const { width, height, badPixels, backgroundE, offsetCounts, saturationCounts } = model;
  const pixels = width * height;
  const sigma = recipe.spotSizePx;
  const readVariance = recipe.readNoise_e * recipe.readNoise_e;
  const sizes = spotSizes(sigma, model.spotSigmaSpreadPx);
  const widest = sizes.sigmaPx[Math.min(sizes.sigmaPx.length - 1, sizes.typical + 2)];
  const reach = Math.max(2, Math.ceil(FIT_REACH_SIGMAS[recipe.effort] * widest));
  const level = levelForFalseMaxima(recipe.falseSpotsPerFrame, sigma, pixels);
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
  const fitter = createGroupFitter({ ...fitsOptions, sizes, bareAt: pictures.bareAt }, fits);
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
    pictures.respond(pictures.lightLevel(readVariance), readVariance);
  };

  const propose = () => {
    const peaks = pictures.findPeaks(level - LEVEL_MARGIN);
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
    for (let i = 0; i < table.count; i++) fits.paint(table.x[i], table.y[i], table.n[i], sigma);
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
    const cell = Math.max(TOGETHER_SIGMAS * sigma, 2 * reach + 1);
    table.index(width, height, cell);
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
    if (sizes.sigmaPx.length > 1 && lookTwice) fitOnce(byResponse, cell);
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
    if (lookTwice) refitNextToOthers(cell);
  };

  /**
   * Fits all groups once, so that every spot has its size: what a wide one sheds around a spot of typical size
   * would be taken for one more spot by the neighbours, whose turn is earlier.
   */
  const fitOnce = (seeds: Int32Array, cell: number) => {
    for (const seed of seeds) {
      if (table.group[seed] >= 0 || table.alive[seed] === 0) continue;
      const count = gather(seed);
      setOffsetSpread(seed);
      fitter.fit(table, members, count, false, 0, 0);
    }
    table.group.fill(-1, 0, table.count);
    table.index(width, height, cell);
  };

  /** Groups whose pixels hold light of groups that had their turn later are fitted again, now that those are known. */
  const refitNextToOthers = (cell: number) => {
    table.index(width, height, cell);
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

  const flagsOf = (i: number): number => {
    const x = table.x[i];
    const y = table.y[i];
    let flags = 0;
    const margin = 2 * sigma;
    if (x < margin || y < margin || x > width - 1 - margin || y > height - 1 - margin) flags |= SPOT_EDGE;
    if (table.near(i, OVERLAP_SIGMAS * sigma, near) > 0) flags |= SPOT_OVERLAP;
    // A streak is as likely to be taken for two close spots: these are marked as well.
    if (Math.max(table.elongation[i], table.elongationAsOne[i]) > ELONGATION_FLAGGED) flags |= SPOT_ELONGATED;
    if (saturationCounts < Infinity && touchesSaturation(x, y)) flags |= SPOT_SATURATED;
    return flags;
  };

  const touchesSaturation = (x: number, y: number): boolean => {
    const r = Math.ceil(2 * sigma);
    for (let j = Math.max(0, Math.round(y) - r); j <= Math.min(height - 1, Math.round(y) + r); j++) {
      for (let i = Math.max(0, Math.round(x) - r); i <= Math.min(width - 1, Math.round(x) + r); i++) {
        if (badPixels[j * width + i] === 0 && !pictures.isUsable(j * width + i)) return true;
      }
    }
    return false;
  };

  const search = (frame: Frame, frameIndex: number) => {
    if (frame.width !== width || frame.height !== height) {
      throw new RangeError(
        `A frame of ${frame.width} x ${frame.height} px came when ${width} x ${height} were expected.`,
      );
    }
    prepare(frame, frameIndex);
    propose();
    fitGroups();
    table.index(width, height, Math.max(TOGETHER_SIGMAS, OVERLAP_SIGMAS) * sigma);
  };

  const isSpot = (i: number): boolean => {
    const { x, y, sx, sy, alive } = table;
    const inside = x[i] >= -0.5 && y[i] >= -0.5 && x[i] < width - 0.5 && y[i] < height - 0.5;
    return alive[i] === 1 && inside && sx[i] < Infinity && sy[i] < Infinity;
  };

  const detect: Detector['detect'] = (frame, frameIndex, sink) => {
    search(frame, frameIndex);
    const { x, y, sx, sy, sn, n, response: snr, doubtX, doubtY } = table;
    for (const i of order.byPlace(table)) {
      if (!isSpot(i)) continue;
      const certainty = n[i] / sn[i];
      const errorX = statedError(sx[i], certainty, doubtX[i]);
      const errorY = statedError(sy[i], certainty, doubtY[i]);
      sink.push(frameIndex, x[i], y[i], errorX, errorY, n[i], snr[i], flagsOf(i));
    }
  };

  const placed = (i: number, found: boolean): PlacedSpot => {
    const certainty = table.n[i] / table.sn[i];
    return {
      xPx: table.x[i],
      yPx: table.y[i],
      sxPx: statedError(table.sx[i], certainty, table.doubtX[i]),
      syPx: statedError(table.sy[i], certainty, table.doubtY[i]),
      brightness: table.n[i],
      snr: table.response[i],
      found,
    };
  };

  const placeAt: Detector['placeAt'] = (frame, frameIndex, xPx, yPx, reachPx) => {
    search(frame, frameIndex);
    const away = (i: number) => Math.hypot(table.x[i] - xPx, table.y[i] - yPx);
    let nearest = -1;
    for (let i = 0; i < table.count; i++) {
      if (isSpot(i) && away(i) <= reachPx && (nearest < 0 || away(i) < away(nearest))) nearest = i;
    }
    if (nearest >= 0) return placed(nearest, true);
    return fitPointed(xPx, yPx, away, reachPx);
  };

  /** Fits a spot begun at a place, together with those around it; kept on weaker grounds than one that nobody asked for. */
  const fitPointed = (
    xPx: number,
    yPx: number,
    away: (i: number) => number,
    reachPx: number,
  ): PlacedSpot | null => {
    const at = Math.round(yPx) * width + Math.round(xPx);
    const noise = Math.sqrt(pictures.bareAt(at) + readVariance);
    const seen = Math.max(response[at], 1);
    const light = (seen * noise) / pictures.kernel.squares;
    const i = table.add(xPx, yPx, light, response[at], sizes.typical);
    // Somebody sees it: it is not dropped as what likelihood alone would not have told from noise.
    table.toldApart[i] = 1;
    fits.paint(table.x[i], table.y[i], table.n[i], sigma);
    table.index(width, height, Math.max(TOGETHER_SIGMAS * sigma, 2 * reach + 1));
    table.group.fill(-1, 0, table.count);
    setOffsetSpread(i);
    fitter.fit(table, members, gather(i), false, 0, 0);
    const certain = table.n[i] > POINTED_SIGMAS_LEAST * table.sn[i];
    return isSpot(i) && certain && away(i) <= reachPx ? placed(i, false) : null;
  };
  return { detect, placeAt };
}
