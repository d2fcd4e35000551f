import { createMatchedFilter, findPeaks, type PeakList } from '../detection/matched-filter';
import type { ElectronFrames } from './electron-frames';
import { lonePeaks } from './lone-peaks';
import { nthElement } from './nth-element';
import { selfSimilarSigma } from './self-similarity';
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
const FIRST_PIXELS = 600_000;

/** How wide the tracers' images are. */
export interface SpotSize {
  /** Typical standard deviation of a spot, px. */
  sigmaPx: number;
  /** How much tracers differ in it, standard deviation, px, without the error of measuring each. NaN when unknown. */
  spreadPx: number;
}

interface FoundSpot {
  frame: number;
  at: number;
  brightnessE: number;
}

/**
 * Standard deviation of a tracer's image: a start from how far the image resembles itself when
 * shifted, then the median over clear, lone spots of the width that makes each most likely.
 */
export function measureSpotSize(
  frames: ElectronFrames,
  width: number,
  height: number,
  readVariance: number,
): SpotSize {
  const unknown: SpotSize = { sigmaPx: SPOT_SIGMA_UNKNOWN_PX, spreadPx: Number.NaN };
  const start = (count: number) =>
    selfSimilarSigma(
      Array.from({ length: count }, (_, f) => frames.frame(f).noise),
      width,
      height,
    );
  const few = Math.max(1, Math.min(frames.count, Math.floor(FIRST_PIXELS / (width * height))));
  let sigma = start(few);
  if (Number.isNaN(sigma) && few < frames.count) sigma = start(frames.count);
  if (Number.isNaN(sigma)) return unknown;
  sigma = Math.min(SIGMA_MOST_PX, Math.max(SIGMA_LEAST_PX, sigma));
  let sought = Number.NaN;
  let spots: FoundSpot[] = [];
  let size = unknown;
  for (let round = 0; round < ROUNDS; round++) {
    if (!(Math.abs(sigma / sought - 1) < SOUGHT_AGAIN_CHANGE)) {
      sought = sigma;
      spots = findLoneSpots(frames, width, height, readVariance, sigma);
    }
    const fitted = fitWidths(spots, frames, width, readVariance, sigma);
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
function findLoneSpots(
  frames: ElectronFrames,
  width: number,
  height: number,
  readVariance: number,
  sigma: number,
): FoundSpot[] {
  const filter = createMatchedFilter(width, height, sigma);
  const response = new Float32Array(width * height);
  const peaks: PeakList = { count: 0, at: new Int32Array(1024) };
  const margin = new WidthFit(sigma, readVariance).marginPx;
  const spots: FoundSpot[] = [];
  for (let f = 0; f < frames.count && spots.length < SPOTS_MOST; f++) {
    const { noise, background } = frames.frame(f);
    filter.apply(noise, response);
    findPeaks(response, width, height, NEIGHBOUR_RESPONSE, peaks);
    const lone = lonePeaks(peaks, response, width, height, CLEAR_RESPONSE, ALONE_SIGMAS * sigma, margin);
    for (const at of lone.slice(0, SPOTS_MOST - spots.length)) {
      const perResponse = Math.sqrt(background[at] + readVariance) / filter.kernel.squares;
      spots.push({ frame: f, at, brightnessE: response[at] * perResponse });
    }
  }
  return spots;
}

function fitWidths(
  spots: readonly FoundSpot[],
  frames: ElectronFrames,
  width: number,
  readVariance: number,
  sigma: number,
) {
  const fit = new WidthFit(sigma, readVariance);
  const widths: number[] = [];
  const errors: number[] = [];
  for (const { frame, at, brightnessE } of spots) {
    if (!fit.run(frames.frame(frame), width, at, brightnessE)) continue;
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
