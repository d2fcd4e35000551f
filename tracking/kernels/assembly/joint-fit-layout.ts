// Memory of the joint fit, from the address `fit` on. `tracking/kernels/joint-fit-memory.ts` lays it out
// the same way for the callers.

import { FrameFacts } from './counts';

/** Most spots fitted at once, and the parameters that they have: offset, then x, y, brightness of each. */
export const SPOTS_MOST: i32 = 6;
export const PARAMETERS_MOST: i32 = 19;

// Arrays of SPOTS_MOST f64 that callers read and write, px and electrons.
export const X: usize = 0;
export const Y: usize = 48;
export const N: usize = 96;
export const SX: usize = 144;
export const SY: usize = 192;
export const SN: usize = 240;
export const ELONGATION: usize = 288;
export const SPLIT_X: usize = 336;
export const SPLIT_Y: usize = 384;
export const CENTRE_X: usize = 432;
export const CENTRE_Y: usize = 480;
/** Standard deviation of each spot's image. */
export const SIGMA: usize = 528;
/** Strongest peak of the residual: response, x, y, brightness. */
export const PEAK: usize = 576;

const SETTINGS: usize = 608;
// First column and row of each spot's box in the window, i32.
export const BOX_X: usize = 768;
export const BOX_Y: usize = 800;
// Vectors and matrices of the scoring, f64; matrices in rows of PARAMETERS_MOST.
export const GRADIENT: usize = 832;
export const STEP: usize = 992;
export const KEPT: usize = 1152;
export const VARIANCE: usize = 1312;
export const INFORMATION: usize = 1472;
export const FACTOR: usize = 4368;
/** Shares of light start here; what follows depends on the size of the boxes. */
export const SHARES: usize = 7296;

/** What belongs to the images at hand and to the fit that was made last. */
@unmanaged
export class Settings {
  // Planes of the image: f32, u8, f32 per pixel, and f32 light of the spots that were painted.
  counts: usize = 0;
  bad: usize = 0;
  background: usize = 0;
  spotLight: usize = 0;
  /** u8, see `joint-fit-paint.ts`. */
  painted: usize = 0;
  imageWidth: i32 = 0;
  imageHeight: i32 = 0;
  /** Boxes have `side` = 2 reach + 1 columns and rows; arrays of shares have room for `shareRoom` numbers. */
  reach: i32 = 0;
  side: i32 = 0;
  shareRoom: i32 = 0;
  /** Most columns and rows of the window. */
  windowMost: i32 = 0;
  // The window in the image; its rows are `stride` numbers apart, a multiple of 4.
  x0: i32 = 0;
  y0: i32 = 0;
  width: i32 = 0;
  height: i32 = 0;
  stride: i32 = 0;
  /** Spots of the fit made last. */
  count: i32 = 0;
  // Arrays of the window: f32 per pixel, `used` all ones or all zeros.
  data: usize = 0;
  fixed: usize = 0;
  used: usize = 0;
  weight: usize = 0;
  score: usize = 0;
  noise: usize = 0;
  /** Taps of the residual filter, f32, at distance 0 .. tapReach. */
  taps: usize = 0;
  tapReach: i32 = 0;
  /** Standard deviation of a typical spot. */
  sigma: f64 = 0;
  readVariance: f64 = 0;
  /** A fit has converged when no spot moves farther than this, px. */
  stepDone: f64 = 0;
  offset: f64 = 0;
  offsetSpread: f64 = 0;
  facts: FrameFacts = changetype<FrameFacts>(0);
}

export function settingsOf(fit: usize): Settings {
  return changetype<Settings>(fit + SETTINGS);
}

// Six arrays of shares per spot: along x the share, its first and second derivative; then along y.
export function shareAt(fit: usize, room: i32, spot: i32, which: i32): usize {
  return fit + SHARES + ((<usize>((6 * spot + which) * room)) << 2);
}
