import { lonePeaks } from './lone-peaks';
import { nthElement } from '../nth-element';
import { selfSimilarSigma } from './self-similarity';
import type { SpotFinder, SpotFrames, SpotWindow } from './spot-frames';
import { WidthFit } from './width-fit';

/** Size assumed when a recording shows no spots: diffraction-limited, well-sampled optics. */
export const SPOT_SIGMA_UNKNOWN_PX = 1.2;
const SIGMA_LEAST_PX = 0.45;
const SIGMA_MOST_PX = 8;
/** Only clear spots, with nobody near, tell their width. */
const CLEAR_RESPONSE = 8;
const NEIGHBOUR_RESPONSE = 4.5;
const ALONE_SIGMAS = 6;
const SPOTS_MOST = 400;
const SPOTS_LEAST = 8;
const ROUNDS = 5;
/** Spots are looked for again when the width has changed by more than this. */
const SOUGHT_AGAIN_CHANGE = 0.1;
const CHANGE_DONE = 0.002;
/** Pixels from which the first idea of the width is made. */
const FIRST_PIXELS = 300_000;

/** How wide the tracers' images are. */
export interface SpotSize {
  /** Typical standard deviation of a spot, px. */
  sigmaPx: number;
  /** How much tracers differ in it, standard deviation, px, without the error of measuring each. NaN when unknown. */
  spreadPx: number;
}

interface FoundSpot {
  window: SpotWindow;
  brightnessE: number;
}

/**
 * Standard deviation of a tracer's image: a start from how far the image resembles itself when
 * shifted, then the median over clear, lone spots of the width that makes each most likely.
 */
export function measureSpotSize(frames: SpotFrames): SpotSize {
  const unknown: SpotSize = { sigmaPx: SPOT_SIGMA_UNKNOWN_PX, spreadPx: Number.NaN };
  const { width, height } = frames;
  // Most optics make spots of about this size; who differs much is looked for once more.
  let sought = SPOT_SIGMA_UNKNOWN_PX;
  let finder = frames.forSpots(sought);
  const start = (count: number) => {
    const noises = Array.from({ length: count }, (_, f) => finder.noiseOf(f));
    return selfSimilarSigma(noises, width, height);
  };
  const few = Math.max(1, Math.min(frames.count, Math.floor(FIRST_PIXELS / (width * height))));
  let sigma = start(few);
  if (Number.isNaN(sigma) && few < frames.count) sigma = start(frames.count);
  if (Number.isNaN(sigma)) return unknown;
  sigma = Math.min(SIGMA_MOST_PX, Math.max(SIGMA_LEAST_PX, sigma));
  let spots: FoundSpot[] | null = null;
  let size = unknown;
  for (let round = 0; round < ROUNDS; round++) {
    if (Math.abs(sigma / sought - 1) > SOUGHT_AGAIN_CHANGE) {
      sought = sigma;
      finder = frames.forSpots(sought);
      spots = null;
    }
    spots ??= findLoneSpots(frames, finder, sought);
    const fitted = fitWidths(spots, frames.readVariance, sigma);
    if (fitted.widths.length < SPOTS_LEAST) return round === 0 ? unknown : size;
    size = summarise(fitted.widths, fitted.errors);
    const next = Math.min(SIGMA_MOST_PX, Math.max(SIGMA_LEAST_PX, size.sigmaPx));
    const change = Math.abs(next / sigma - 1);
    sigma = next;
    size.sigmaPx = sigma;
    if (change < CHANGE_DONE) break;
  }
  return size;
}

/** Clear spots that stand alone, frame by frame until there are enough. */
function findLoneSpots(frames: SpotFrames, finder: SpotFinder, sigma: number): FoundSpot[] {
  const { width, height, readVariance } = frames;
  const { response, kernelSquares } = finder;
  // Fits of spots that prove to be wider, but not so much that they are sought again, need more room.
  const margin = new WidthFit(sigma * (1 + SOUGHT_AGAIN_CHANGE), readVariance).marginPx;
  const spots: FoundSpot[] = [];
  for (let f = 0; f < frames.count && spots.length < SPOTS_MOST; f++) {
    const peaks = finder.peaksOf(f, NEIGHBOUR_RESPONSE);
    const lone = lonePeaks(peaks, response, width, height, CLEAR_RESPONSE, ALONE_SIGMAS * sigma, margin);
    for (const at of lone.slice(0, SPOTS_MOST - spots.length)) {
      const perResponse = Math.sqrt(finder.bareAt(at) + readVariance) / kernelSquares;
      spots.push({ window: finder.cut(at, margin), brightnessE: response[at] * perResponse });
    }
  }
  return spots;
}

function fitWidths(spots: readonly FoundSpot[], readVariance: number, sigma: number) {
  const fit = new WidthFit(sigma, readVariance);
  const widths: number[] = [];
  const errors: number[] = [];
  for (const { window, brightnessE } of spots) {
    if (!fit.run(window, brightnessE)) continue;
    widths.push(fit.widthPx);
    errors.push(fit.errorPx);
  }
  return { widths, errors };
}

function summarise(widths: readonly number[], errors: readonly number[]): SpotSize {
  const median = medianOf(widths);
  const deviation = 1.4826 * medianOf(widths.map((width) => Math.abs(width - median)));
  const error = medianOf(errors);
  return { sigmaPx: median, spreadPx: Math.sqrt(Math.max(0, deviation * deviation - error * error)) };
}

function medianOf(values: readonly number[]): number {
  return nthElement(Float64Array.from(values), values.length, values.length >> 1);
}
