import { measureLightLevel } from '../detection/light-level';
import type { Frame, ImageModel } from '../types';
import { DARK_VARIANCE_E2 } from '../detection/second-look';
import { backgroundOfFrame } from './background-of-frame';

/** A frame in photoelectrons with its background. */
export interface ElectronFrame {
  electrons: Float32Array;
  background: Float32Array;
  usable: Uint8Array;
  /** What stands above the background, in units of its noise; 0 where a pixel isn't usable. */
  noise: Float32Array;
}

/** Frames in which the size of spots is measured, at most. */
const FRAMES_MOST = 8;

/** Some frames, spread over those of the model, as detection sees them; each is made when asked for first. */
export interface ElectronFrames {
  count: number;
  frame(index: number): ElectronFrame;
}

/** @param frameNumbers those of the frames in the recording; without them its mean background has to do. */
export function electronFrames(
  frames: readonly Frame[],
  frameNumbers: readonly number[] | null,
  model: ImageModel,
): ElectronFrames {
  const count = Math.min(FRAMES_MOST, frames.length);
  const made: ElectronFrame[] = [];
  const frame = (index: number) => {
    // Far from each other first, so that a few are a fair choice.
    const turn = count < FRAMES_MOST ? index : (3 * index) % FRAMES_MOST;
    const f = Math.floor((turn * frames.length) / count);
    const number = frameNumbers === null ? 0 : frameNumbers[f];
    made[index] ??= inElectrons(frames[f], number, model);
    return made[index];
  };
  return { count, frame };
}

function inElectrons({ counts }: Frame, frameNumber: number, model: ImageModel): ElectronFrame {
  const { gainCountsPerE, offsetCounts, readNoiseE, badPixels, saturationCounts } = model;
  const pixels = counts.length;
  const readVariance = readNoiseE * readNoiseE;
  const electrons = new Float32Array(pixels);
  const usable = new Uint8Array(pixels);
  const background = new Float32Array(pixels);
  const noise = new Float32Array(pixels);
  const perCount = 1 / gainCountsPerE;
  for (let i = 0; i < pixels; i++) {
    const count = counts[i];
    const e = (count - offsetCounts) * perCount;
    if (badPixels[i] !== 0 || count >= saturationCounts || e - e !== 0) continue;
    usable[i] = 1;
    electrons[i] = e;
  }
  backgroundOfFrame(model, frameNumber, background);
  const { scale, shift } = measureLightLevel(electrons, background, usable, readVariance);
  for (let i = 0; i < pixels; i++) {
    const level = Math.max(0, scale * background[i] + shift);
    background[i] = level;
    if (usable[i] === 1)
      noise[i] = (electrons[i] - level) / Math.sqrt(level + readVariance + DARK_VARIANCE_E2);
  }
  return { electrons, background, usable, noise };
}
