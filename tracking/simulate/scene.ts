/** What happens in front of the simulated camera: known truth, no noise yet. */

/** Codes of `Scene.kind`, one per tracer. */
export const KIND_TRAPPED = 0;
export const KIND_FREE = 1;

/** Two lines that met and parted, carried by two trapped tracers. */
export interface SceneEvent {
  tracerA: number;
  tracerB: number;
  /** Time of closest approach, frames (may lie between two frames). */
  t0Frames: number;
  /** delta = A sqrt(kappa |t - t0|), dimensionless, on either side of t0. */
  amplitudeBefore: number;
  amplitudeAfter: number;
}

/** A free tracer that a line caught: it is trapped from this frame on. */
export interface SceneCapture {
  tracer: number;
  frame: number;
}

/**
 * Tracers and where they emit. Points of tracer `i` are `start[i] .. start[i + 1] - 1`, by frame;
 * a frame in which it emits nothing has no point, so frames may be missing.
 */
export interface Scene {
  widthPx: number;
  heightPx: number;
  frames: number;
  tracers: number;
  /** Length tracers + 1. */
  start: Uint32Array;
  frame: Uint32Array;
  xPx: Float32Array;
  yPx: Float32Array;
  /** Expected photoelectrons of the tracer in the frame. */
  brightnessE: Float32Array;
  /** Per tracer: KIND_TRAPPED or KIND_FREE. */
  kind: Uint8Array;
  /** Per tracer: the vortex line that carries it, -1 for none. */
  line: Int32Array;
  events: SceneEvent[];
  /** Captures of free tracers (their kind stays KIND_FREE). */
  captures: SceneCapture[];
  /** Line density that the scene was built with, m^-2; NaN where it has no lines. */
  lineDensityM2: number;
}

/** The simulated camera and light. */
export interface SceneCamera {
  spotSigmaPx: number;
  /** Background of the sheet's brightest part, electrons per pixel. */
  backgroundE: number;
  /** Relative light of the sheet at the top, the brightest row and the bottom follow a Gaussian across y. */
  sheetEdgeLight: number;
  /** Relative amplitude of a slow ripple across x, 0 for none. */
  ripple: number;
  readNoiseE: number;
  gainCountsPerE: number;
  offsetCounts: number;
  bitDepth: 8 | 12 | 16;
  seed: number;
  /** Share of the frame interval during which the shutter is open, 0 to 1; left out, spots stand still. */
  exposureFrames?: number;
}
