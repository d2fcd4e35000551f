import { findBadPixels } from './image-model/bad-pixels';
import { measureCameraNoise } from './image-model/photon-transfer';
import { findQuietPixels } from './image-model/quiet-pixels';
import { findSaturation } from './image-model/saturation';
import { measureSpotSigma } from './image-model/spot-size';
import { measureLightLevel } from './detection/light-level';
import type { Frame, ImageModel, RecipeRequest } from './types';

/** Frames that the image model is measured from, and the most pixels that they may hold together. */
const MODEL_FRAMES = 32;
const MODEL_PIXELS_MOST = 120_000_000;
/** Frames of those in which the size of spots is measured. */
const SPOT_SIZE_FRAMES = 8;

/**
 * Frames to measure the image model from: pairs of neighbours spread evenly over the recording,
 * in order. Their number depends on the recording alone, so every worker picks the same.
 *
 * @param pixelsPerFrame fewer pairs are picked of very large frames, for the sake of memory.
 */
export function pickModelFrames(frameCount: number, pixelsPerFrame = 1): number[] {
  const most = Math.max(2, Math.min(MODEL_FRAMES, Math.floor(MODEL_PIXELS_MOST / pixelsPerFrame)));
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
 * without tracers, bad pixels, saturation, size of a tracer's image. Values that the request gives
 * are taken from it.
 *
 * @param frames those of `pickModelFrames`, in that order.
 * @throws RangeError for no frames or frames of different sizes.
 */
export function measureImage(frames: readonly Frame[], request: RecipeRequest): ImageModel {
  if (frames.length === 0) throw new RangeError('An image model needs at least one frame. Received 0.');
  const { width, height } = frames[0];
  for (const frame of frames) {
    if (frame.width !== width || frame.height !== height || frame.counts.length !== width * height) {
      throw new RangeError(
        `All frames must be ${width} x ${height} px. Received one of ${frame.width} x ${frame.height} px.`,
      );
    }
  }
  const quietPixels = findQuietPixels(frames);
  const camera = measureCameraNoise(frames, quietPixels, request);
  const { gainCountsPerE: gain, offsetCounts: offset, readNoiseE } = camera;
  const readVariance = readNoiseE * readNoiseE;
  const backgroundE = quietPixels.level.map((level) => Math.max(0, (level - offset) / gain));
  const varianceOf = (at: number) => gain * gain * (backgroundE[at] + readVariance) + 1e-12;
  const badPixels = findBadPixels(frames, quietPixels.level, varianceOf);
  const middle = (height >> 1) * width + (width >> 1);
  const saturationCounts = findSaturation(frames, quietPixels.level[middle], varianceOf(middle));
  const given = typeof request.spotSizePx === 'number' ? request.spotSizePx : undefined;
  return {
    width,
    height,
    ...camera,
    spotSigmaPx: given ?? spotSigma(),
    saturationCounts,
    badPixels,
    backgroundE,
  };

  function spotSigma(): number {
    const step = Math.max(1, Math.floor(frames.length / SPOT_SIZE_FRAMES));
    const chosen = frames.filter((_, i) => i % step === 0).slice(0, SPOT_SIZE_FRAMES);
    const inElectrons = chosen.map(({ counts }) => {
      const electrons = new Float32Array(counts.length);
      const usable = new Uint8Array(counts.length);
      for (let i = 0; i < counts.length; i++) {
        const e = (counts[i] - offset) / gain;
        const good = badPixels[i] === 0 && counts[i] < saturationCounts && e - e === 0;
        usable[i] = good ? 1 : 0;
        electrons[i] = good ? e : 0;
      }
      const light = measureLightLevel(electrons, backgroundE, usable, readVariance);
      const background = backgroundE.map((e) => Math.max(0, light.scale * e + light.shift));
      return { electrons, usable, background };
    });
    return measureSpotSigma(inElectrons, width, height, readVariance);
  }
}
