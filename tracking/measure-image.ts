import { fitBackground } from './image-model/background-nodes';
import { findBadPixels } from './image-model/bad-pixels';
import { varianceOf, type PixelNoise } from './image-model/pixel-noise';
import { interpolateBlocks, raiseToZero } from './image-model/block-grid';
import { blockStatistics } from './image-model/block-statistics';
import { measureCameraNoise } from './image-model/photon-transfer';
import { findQuietPixels } from './image-model/quiet-pixels';
import { findSaturation } from './image-model/saturation';
import { spotFrames } from './image-model/spot-frames';
import { measureSpotSize } from './image-model/spot-size';
import type { Kernels } from './kernels/kernels';
import { plainKernels } from './kernels/plain-kernels';
import type { Frame, ImageModel, RecipeRequest } from './types';

/**
 * Frames that the image model is measured from, at most. Statistics of so many pixels are plenty, if they come
 * from this many frames at least.
 */
const MODEL = {
  full: { framesMost: 32, pixelsWanted: 5_300_000, framesWanted: 12 },
  quick: { framesMost: 12, pixelsWanted: 2_100_000, framesWanted: 6 },
} as const;
/** The most pixels that the frames may hold together, for the sake of memory. */
const MODEL_PIXELS_MOST = 120_000_000;

/**
 * Frames to measure the image model from: pairs of neighbours spread evenly over the recording,
 * in order. Their number depends on the recording and the effort alone, so every worker picks the same.
 *
 * @param pixelsPerFrame fewer pairs are picked of large frames, for the sake of time and memory.
 */
export function pickModelFrames(
  frameCount: number,
  pixelsPerFrame = 1,
  effort?: RecipeRequest['effort'],
): number[] {
  const { framesMost, pixelsWanted, framesWanted } = MODEL[effort === 'quick' ? 'quick' : 'full'];
  const wanted = Math.max(framesWanted, Math.floor(pixelsWanted / pixelsPerFrame));
  const allowed = Math.floor(MODEL_PIXELS_MOST / pixelsPerFrame);
  const most = Math.max(2, Math.min(framesMost, wanted, allowed));
  if (frameCount <= most) return Array.from({ length: frameCount }, (_, i) => i);
  const pairs = Math.floor(most / 2);
  const picked: number[] = [];
  for (let p = 0; p < pairs; p++) {
    const first = Math.round((p * (frameCount - 2)) / Math.max(1, pairs - 1));
    picked.push(first, first + 1);
  }
  return picked;
}

/**
 * What camera and tracers look like: gain, offset and read noise by photon transfer, background
 * without tracers and how it drifts, bad pixels, saturation, size of a tracer's image. Values that
 * the request gives are taken from it.
 *
 * @param frames those of `pickModelFrames`, in that order.
 * @param frameNumbers what `pickModelFrames` returned; without them a drift of the background can't
 *   be placed in time and its mean has to do.
 * @param kernels what goes over all pixels: plain or compiled
 * @throws RangeError for no frames or frames of different sizes.
 */
export function measureImage(
  frames: readonly Frame[],
  request: RecipeRequest,
  frameNumbers: readonly number[] | null = null,
  kernels: Kernels = plainKernels,
): ImageModel {
  checkFrames(frames, frameNumbers);
  const { width, height } = frames[0];
  const quietPixels = findQuietPixels(frames, kernels.forPairs(width, height));
  const statistics = blockStatistics(quietPixels);
  const camera = measureCameraNoise(quietPixels, statistics, request);
  const { meanE, drift } = fitBackground(statistics, camera, frameNumbers && pairNumbers(frameNumbers));
  const backgroundE = interpolateBlocks(meanE, statistics.grid);
  raiseToZero(backgroundE);
  const { sums, level } = quietPixels;
  const noise = pixelNoise(backgroundE, camera);
  const badPixels = findBadPixels(sums, noise, statistics.pairs, frames.length, width, height);
  const middle = (height >> 1) * width + (width >> 1);
  const model: ImageModel = {
    width,
    height,
    ...camera,
    spotSigmaPx: Number.NaN,
    saturationCounts: findSaturation(
      frames,
      sums.highest,
      sums.highestPixels,
      level[middle],
      varianceOf(noise, middle),
    ),
    badPixels,
    backgroundE,
    backgroundDrift: drift,
  };
  const size = measureSpotSize(spotFrames(frames, frameNumbers, model, kernels));
  model.spotSigmaPx = typeof request.spotSizePx === 'number' ? request.spotSizePx : size.sigmaPx;
  model.spotSigmaSpreadPx = size.spreadPx;
  return model;
}

function checkFrames(frames: readonly Frame[], frameNumbers: readonly number[] | null): void {
  if (frames.length === 0) throw new RangeError('An image model needs at least one frame. Received 0.');
  const { width, height } = frames[0];
  for (const frame of frames) {
    if (frame.width !== width || frame.height !== height || frame.counts.length !== width * height) {
      throw new RangeError(
        `All frames must be ${width} x ${height} px. Received one of ${frame.width} x ${frame.height} px.`,
      );
    }
  }
  if (frameNumbers !== null && frameNumbers.length !== frames.length) {
    throw new RangeError(`${frames.length} frames need as many numbers. Received ${frameNumbers.length}.`);
  }
}

/** When pairs of frames were taken: mean number of their two frames. */
function pairNumbers(frameNumbers: readonly number[]): Float64Array {
  return Float64Array.from({ length: Math.ceil(frameNumbers.length / 2) }, (_, p) => {
    const last = Math.min(frameNumbers.length - 1, 2 * p + 1);
    return 0.5 * (frameNumbers[2 * p] + frameNumbers[last]);
  });
}

function pixelNoise(
  backgroundE: Float32Array,
  { gainCountsPerE, readNoiseE }: Pick<ImageModel, 'gainCountsPerE' | 'readNoiseE'>,
): PixelNoise {
  return { backgroundE, square: gainCountsPerE * gainCountsPerE, readVariance: readNoiseE * readNoiseE };
}
