import { FitWindow } from '../detection/fit-window';
import { JointFit } from '../detection/joint-fit';
import { createMatchedFilter, findPeaks, type PeakList } from '../detection/matched-filter';

/** A frame in photoelectrons with its background. */
export interface ElectronFrame {
  electrons: Float32Array;
  background: Float32Array;
  usable: Uint8Array;
}

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
/** Widths at which each spot's likelihood is compared. */
const TRIED = [0.8, 1, 1.25];
const LARGEST_LAG_PX = 24;

/**
 * Standard deviation of a tracer's image: a start from how far the image resembles itself when
 * shifted, then the median over clear, lone spots of the width that makes each most likely.
 */
export function measureSpotSigma(
  frames: readonly ElectronFrame[],
  width: number,
  height: number,
  readVariance: number,
): number {
  const noises = frames.map((frame) => inUnitsOfNoise(frame, readVariance));
  let sigma = selfSimilarSigma(noises, width, height);
  if (Number.isNaN(sigma)) return SPOT_SIGMA_UNKNOWN_PX;
  for (let round = 0; round < ROUNDS; round++) {
    const widths = likelyWidths(frames, noises, width, height, readVariance, sigma);
    if (widths.length < SPOTS_LEAST) return round === 0 ? SPOT_SIGMA_UNKNOWN_PX : sigma;
    widths.sort((a, b) => a - b);
    const next = Math.min(SIGMA_MOST_PX, Math.max(SIGMA_LEAST_PX, widths[widths.length >> 1]));
    const change = Math.abs(next - sigma) / sigma;
    sigma = next;
    if (change < 0.003) break;
  }
  return sigma;
}

function inUnitsOfNoise(
  { electrons, background, usable }: ElectronFrame,
  readVariance: number,
): Float32Array {
  return electrons.map((e, i) =>
    usable[i] === 1 ? (e - background[i]) / Math.sqrt(background[i] + readVariance + 1e-3) : 0,
  );
}

/**
 * An image of Gaussian spots shifted by r correlates with itself as exp(-r^2 / 4 s^2); noise adds
 * at r = 0 only. s follows from where the correlation has fallen to half of its value at 1 px. NaN
 * when there is nothing but noise.
 */
function selfSimilarSigma(noises: readonly Float32Array[], width: number, height: number): number {
  const lags = Math.min(LARGEST_LAG_PX, Math.floor(Math.min(width, height) / 3));
  const correlation = (lag: number) => {
    let sum = 0;
    let count = 0;
    for (const noise of noises) {
      for (let y = 0; y + lag < height; y++) {
        const row = y * width;
        for (let x = 0; x + lag < width; x++) {
          sum += noise[row + x] * (noise[row + x + lag] + noise[row + x + lag * width]);
        }
        count += 2 * (width - lag);
      }
    }
    return sum / count;
  };
  const first = correlation(1);
  const certain = 6 / Math.sqrt(2 * noises.length * width * height);
  if (!(first > certain)) return Number.NaN;
  let previous = first;
  for (let lag = 2; lag <= lags; lag++) {
    const value = correlation(lag);
    if (value < 0.5 * first) {
      // Straight line of ln C against lag^2, which it is for Gaussian spots.
      const low = Math.log(Math.max(value, 0.02 * first) / first);
      const high = Math.log(previous / first);
      const share = (high - Math.log(0.5)) / (high - low);
      const squared = (lag - 1) ** 2 + share * (lag ** 2 - (lag - 1) ** 2);
      const variance = (squared - 1) / (4 * Math.LN2) - 1 / 12;
      return Math.min(SIGMA_MOST_PX, Math.max(SIGMA_LEAST_PX, Math.sqrt(Math.max(0, variance))));
    }
    previous = value;
  }
  return SIGMA_MOST_PX;
}

function likelyWidths(
  frames: readonly ElectronFrame[],
  noises: readonly Float32Array[],
  width: number,
  height: number,
  readVariance: number,
  sigma: number,
): number[] {
  const filter = createMatchedFilter(width, height, sigma);
  const response = new Float32Array(width * height);
  const peaks: PeakList = { count: 0, at: new Int32Array(1024) };
  const reach = Math.max(2, Math.ceil(3 * sigma * TRIED[2]));
  const fits = TRIED.map((factor) => new JointFit(factor * sigma, reach, 3));
  const window = new FitWindow();
  const xs = new Float64Array(1);
  const ys = new Float64Array(1);
  const widths: number[] = [];
  const perFrame = Math.ceil(SPOTS_MOST / frames.length);
  frames.forEach((frame, f) => {
    filter.apply(noises[f], response);
    findPeaks(response, width, height, NEIGHBOUR_RESPONSE, peaks);
    const lone = lonePeaks(peaks, response, width, height, ALONE_SIGMAS * sigma, reach).slice(0, perFrame);
    for (const at of lone) {
      xs[0] = at % width;
      ys[0] = Math.floor(at / width);
      const brightness =
        (response[at] * Math.sqrt(frame.background[at] + readVariance)) / filter.kernel.squares;
      const { electrons, background, usable } = frame;
      window.load(electrons, background, usable, width, height, readVariance, xs, ys, 1, reach);
      const likelihood = fits.map((fit) => {
        fit.count = 1;
        fit.x[0] = xs[0];
        fit.y[0] = ys[0];
        fit.n[0] = brightness;
        fit.run(window);
        return fit.logLikelihood(window);
      });
      const best = vertex(likelihood[0], likelihood[1], likelihood[2]);
      widths.push(sigma * TRIED[2] ** best);
    }
  });
  return widths;
}

/** Maximum of the parabola through values at -1, 0, 1, not farther out than 2. */
function vertex(before: number, middle: number, after: number): number {
  const bend = 2 * middle - before - after;
  if (!(bend > 0)) return after > before ? 2 : -2;
  return Math.max(-2, Math.min(2, (0.5 * (after - before)) / bend));
}

/** Clear peaks with no other peak near, away from the border, the clearest first. */
function lonePeaks(
  peaks: PeakList,
  response: Float32Array,
  width: number,
  height: number,
  apartPx: number,
  marginPx: number,
): number[] {
  const places = Array.from(peaks.at.subarray(0, peaks.count));
  const lone = places.filter((at, k) => {
    if (response[at] < CLEAR_RESPONSE) return false;
    const x = at % width;
    const y = Math.floor(at / width);
    if (x < marginPx || y < marginPx || x >= width - marginPx || y >= height - marginPx) return false;
    // Peaks are in reading order, so only those a few rows away need a look.
    for (const step of [-1, 1]) {
      for (let m = k + step; m >= 0 && m < places.length; m += step) {
        const dy = Math.floor(places[m] / width) - y;
        if (Math.abs(dy) > apartPx) break;
        if (Math.hypot((places[m] % width) - x, dy) < apartPx) return false;
      }
    }
    return true;
  });
  return lone.sort((a, b) => response[b] - response[a] || a - b);
}
