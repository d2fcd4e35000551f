import { BLOCK_PX } from './block-grid';
import type { ScanSums } from './pair-scan';
import { varianceOf, type PixelNoise } from './pixel-noise';

/** A pixel's mean must be off by this many standard errors, and by this much of the noise of one frame. */
const OFF_STANDARD_ERRORS = 8;
const OFF_NOISE = 1.5;
/** A tracer lights the neighbours too; a hot pixel doesn't. Mean of four neighbours, relative. */
const NEIGHBOUR_SHARE_MOST = 0.2;
/**
 * A pixel that is bright now and then: its mean square is more than it should be by so many times
 * that, and by more than a single frame of 8 noise widths makes, and that of its neighbours,
 * relative, isn't. Squares of a spot of 0.5 px fall to 0.05 one pixel away.
 */
const BLINKING_EXCESS = 6;
const BLINKING_NOISE = 8;
const BLINKING_NEIGHBOUR_SHARE_MOST = 0.04;
/**
 * A pixel that varies by less than this share of the variance is stuck, or less still where few
 * frames could make that by chance in one of so many pixels.
 */
const STUCK_VARIANCE_SHARE = 0.05;
const STUCK_FRAMES_LEAST = 8;
const STUCK_BY_CHANCE = 1e-10;

/**
 * Pixels that can't be trusted: hot, dead, stuck or blinking, told from tracers by neighbours that
 * look as usual.
 *
 * @param sums of what pixels are above the background, over `pairs` pairs of altogether `frames` frames.
 * @param noise of one frame, by pixel.
 */
export function findBadPixels(
  { sum, squares }: Pick<ScanSums, 'sum' | 'squares'>,
  noise: PixelNoise,
  pairs: number,
  frames: number,
  width: number,
  height: number,
): Uint8Array {
  const pixels = width * height;
  const bad = new Uint8Array(pixels);
  const offShare = Math.max(OFF_NOISE, OFF_STANDARD_ERRORS / Math.sqrt(frames));
  const blinkingShare = Math.max(BLINKING_EXCESS, BLINKING_NOISE ** 2 / frames);
  const stuckShare = frames < STUCK_FRAMES_LEAST ? 0 : shareByChance(frames);
  let count = 0;
  for (let i = 0; i < pixels; i++) {
    const expected = varianceOf(noise, i);
    const off = sum[i] / pairs;
    const meanSquare = squares[i] / pairs;
    const stuck = meanSquare - off * off < stuckShare * expected;
    const isHot =
      off * off >= offShare * offShare * expected &&
      neighbourMean(sum, i, width, height) / pairs / off < NEIGHBOUR_SHARE_MOST;
    const excess = meanSquare - expected;
    const isBlinking =
      excess >= blinkingShare * expected &&
      neighbourMean(squares, i, width, height) / pairs - expected < BLINKING_NEIGHBOUR_SHARE_MOST * excess;
    if (stuck || isHot || isBlinking) {
      bad[i] = 1;
      count++;
    }
  }
  // Whole dark regions or a frozen recording are a property of the recording, not of its pixels.
  return count > pixels / BLOCK_PX ? new Uint8Array(pixels) : bad;
}

/** Lower tail of chi^2 with k degrees of freedom: (x / 2)^(k / 2) / Gamma(k / 2 + 1) for small x. */
function shareByChance(frames: number): number {
  const half = 0.5 * (frames - 1);
  let gamma = half % 1 === 0 ? 1 : Math.sqrt(Math.PI);
  for (let z = half % 1 === 0 ? 1 : 0.5; z <= half; z++) gamma *= z;
  const x = 2 * (STUCK_BY_CHANCE * gamma) ** (1 / half);
  return Math.min(STUCK_VARIANCE_SHARE, x / frames);
}

function neighbourMean(values: Float32Array, at: number, width: number, height: number): number {
  const x = at % width;
  let sum = 0;
  let count = 0;
  if (x > 0) [sum, count] = [sum + values[at - 1], count + 1];
  if (x < width - 1) [sum, count] = [sum + values[at + 1], count + 1];
  if (at >= width) [sum, count] = [sum + values[at - width], count + 1];
  if (at < width * (height - 1)) [sum, count] = [sum + values[at + width], count + 1];
  return count > 0 ? sum / count : 0;
}
