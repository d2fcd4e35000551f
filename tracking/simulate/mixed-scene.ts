import { livingTracers } from './living-tracers';
import type { Scene, SceneCamera } from './scene';
import { giveAllTheSameSnr, standardCamera } from './standard-scene';

/** Two densities of the same tracers: few to a frame, and many in a larger one. */
export type MixedSet = 'sparse' | 'dense';

/** Size of a whole recording of each set, and tracers in sight at once. */
export const MIXED_SIZES = {
  sparse: { widthPx: 512, heightPx: 512, frames: 200, tracers: 300 },
  dense: { widthPx: 1024, heightPx: 1024, frames: 100, tracers: 1500 },
} as const;

export interface MixedOptions {
  set: MixedSet;
  seed: number;
  /** Peak / sqrt(peak + background + read variance) of every spot, in place of mixed brightness. */
  snr?: number;
  widthPx?: number;
  heightPx?: number;
  frames?: number;
  tracers?: number;
}

const MEDIAN_ELECTRONS = 450;
const LN_DEVIATION = 0.45;

/**
 * Background 20 electrons under a light sheet of which 0.35 is left at top and bottom, with ripples
 * of 12 %; the rest as in the standard recording.
 */
export function mixedCamera(seed: number): SceneCamera {
  return { ...standardCamera(seed), backgroundE: 20, sheetEdgeLight: 0.35, ripple: 0.12 };
}

/**
 * Tracers of mixed brightness, log-normal about 450 photoelectrons, peak SNR mostly 2 to 10: 55 %
 * carried by a parabolic flow, 35 % trapped with bursts, 10 % in pairs that meet and part.
 */
export function mixedScene({ set, seed, snr, ...size }: MixedOptions): Scene {
  const scene = livingTracers({
    ...MIXED_SIZES[set],
    ...size,
    seed,
    brightnessE: (random) => MEDIAN_ELECTRONS * Math.exp(LN_DEVIATION * random.normal()),
  });
  if (snr !== undefined) giveAllTheSameSnr(scene, mixedCamera(seed), snr);
  return scene;
}
