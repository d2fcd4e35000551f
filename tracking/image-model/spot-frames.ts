import { DARK_VARIANCE_E2 } from '../detection/second-look';
import type { CountScale, FrameKernels, Kernels, Peaks } from '../kernels/kernels';
import { electronScale, electronsOf, type ElectronScale } from '../kernels/noise-units';
import type { Frame, ImageModel } from '../types';
import { blocksOfFrame } from './background-of-frame';

/** Frames in which the size of spots is measured, at most. */
const FRAMES_MOST = 8;

/** A square cut out of a frame, row by row. */
export interface SpotWindow {
  /** Pixels of a side, odd. */
  side: number;
  /** Photoelectrons. */
  electrons: Float32Array;
  /** Expected without spots, photoelectrons. */
  background: Float32Array;
  /** 1 where a pixel counts. */
  usable: Uint8Array;
}

/** Some frames, spread over those of the model, as detection sees them. */
export interface SpotFrames {
  readonly width: number;
  readonly height: number;
  /** How many there are. */
  readonly count: number;
  /** Read variance, electrons^2. */
  readonly readVariance: number;
  /** Detection's view of the frames for spots of a size. */
  forSpots(sigmaPx: number): SpotFinder;
}

/** Frames correlated with spots of one size; one frame at a time. */
export interface SpotFinder {
  readonly kernelSquares: number;
  readonly response: Float32Array;
  /** Takes the frame and returns where the response peaks from `level` on, in reading order. */
  peaksOf(index: number, level: number): Peaks;
  /** What stands above the background in units of its noise, by pixel; 0 where a pixel isn't usable. Takes the frame. */
  noiseOf(index: number): Float32Array;
  /** Expected light of a pixel of the frame at hand, electrons. */
  bareAt(pixel: number): number;
  /** Cuts a square around a pixel out of the frame at hand; all of it must lie inside. */
  cut(pixel: number, reachPx: number): SpotWindow;
}

/** @param frameNumbers those of the frames in the recording; without them its mean background has to do. */
export function spotFrames(
  frames: readonly Frame[],
  frameNumbers: readonly number[] | null,
  model: ImageModel,
  kernels: Kernels,
): SpotFrames {
  const { width, height } = model;
  const count = Math.min(FRAMES_MOST, frames.length);
  const readVariance = model.readNoiseE * model.readNoiseE;
  const scale: CountScale = {
    offsetCounts: model.offsetCounts,
    perCount: 1 / model.gainCountsPerE,
    saturationCounts: model.saturationCounts,
  };
  const drift = frameNumbers === null ? null : model.backgroundDrift;
  const blocks = new Float64Array(drift ? drift.columns * drift.rows : 0);

  const imagesFor = (spotSigmaPx: number): FrameKernels => {
    const images = kernels.forImages({ width, height, spotSigmaPx });
    images.bad.set(model.badPixels);
    images.background.set(model.backgroundE);
    return images;
  };

  /** Takes a frame in and finds its light, and its peaks if a level is given. */
  const respond = (images: FrameKernels, index: number, peakLevel?: number): Frame => {
    // Far from each other first, so that a few are a fair choice.
    const turn = count < FRAMES_MOST ? index : (3 * index) % FRAMES_MOST;
    const f = Math.floor((turn * frames.length) / count);
    if (drift && frameNumbers) {
      blocksOfFrame(drift, frameNumbers[f], blocks);
      images.paintBackground(blocks, drift);
    }
    images.setFrame(frames[f].counts, scale);
    images.respond(images.lightLevel(readVariance), readVariance, peakLevel);
    return frames[f];
  };

  const inElectrons = electronScale(scale);
  const forSpots: SpotFrames['forSpots'] = (sigmaPx) => {
    const images = imagesFor(sigmaPx);
    let frame = frames[0];
    return {
      kernelSquares: images.kernel.squares,
      response: images.response,
      peaksOf: (index, level) => {
        frame = respond(images, index, level);
        return images.findPeaks(level);
      },
      noiseOf: (index) => {
        frame = respond(images, index);
        return noiseImage(images, frame, inElectrons, readVariance);
      },
      bareAt: (pixel) => images.bareAt(pixel),
      cut: (pixel, reachPx) => cutWindow(images, frame, inElectrons, pixel, reachPx),
    };
  };
  return { width, height, count, readVariance, forSpots };
}

function noiseImage(
  images: FrameKernels,
  { counts }: Frame,
  scale: ElectronScale,
  readVariance: number,
): Float32Array {
  const out = new Float32Array(counts.length);
  for (let i = 0; i < out.length; i++) {
    if (!images.isUsable(i)) continue;
    const bare = images.bareAt(i);
    out[i] = (electronsOf(counts[i], scale) - bare) / Math.sqrt(bare + readVariance + DARK_VARIANCE_E2);
  }
  return out;
}

function cutWindow(
  images: FrameKernels,
  { width, counts }: Frame,
  scale: ElectronScale,
  pixel: number,
  reachPx: number,
): SpotWindow {
  const side = 2 * reachPx + 1;
  const electrons = new Float32Array(side * side);
  const background = new Float32Array(side * side);
  const usable = new Uint8Array(side * side);
  for (let j = 0, to = 0; j < side; j++) {
    const row = pixel + (j - reachPx) * width - reachPx;
    for (let at = row; at < row + side; at++, to++) {
      background[to] = images.bareAt(at);
      if (!images.isUsable(at)) continue;
      usable[to] = 1;
      electrons[to] = electronsOf(counts[at], scale);
    }
  }
  return { side, electrons, background, usable };
}
