/**
 * The shapes that stages hand to each other. All are structures of arrays: entry `i` of every
 * array belongs to item `i`. Pixel axes: x to the right, y down, the centre of the top left pixel
 * is (0, 0). Brightness is in photoelectrons.
 */

/** One camera frame: `counts[y * width + x]`, camera counts, not yet electrons. */
export interface Frame {
  width: number;
  height: number;
  counts: Float32Array;
}

/**
 * What a recording's camera and tracers look like, measured once per analysis from frames spread
 * over the whole stack, so that the spots of a frame never depend on how the stack was cut.
 */
export interface ImageModel {
  width: number;
  height: number;
  /** Camera counts per photoelectron, > 0. */
  gainCountsPerE: number;
  /** Camera counts at zero light. */
  offsetCounts: number;
  /** Read noise, electrons r.m.s., >= 0. */
  readNoiseE: number;
  /** Standard deviation of a tracer's image, px, > 0. */
  spotSigmaPx: number;
  /**
   * How much tracers differ in that, standard deviation, px, once the error of measuring each is
   * taken off; NaN when unknown. A filter of one width finds spots of s (1 +- 0.2) with less than 2 %
   * of the response lost, so a second width pays from a spread of about a quarter of the size.
   */
  spotSigmaSpreadPx?: number;
  /** Count at which the camera saturates, or Infinity. */
  saturationCounts: number;
  /** 1 where a pixel can't be trusted (hot or dead), length width * height. */
  badPixels: Uint8Array;
  /** Background, mean over the whole stack, electrons, length width * height. */
  backgroundE: Float32Array;
  /** How the background changes over the stack but for its brightness as a whole; nothing where it doesn't. */
  backgroundDrift?: BackgroundDrift | null;
}

/** Background on blocks of the image at a few times; `backgroundOfFrame` makes pictures of it. */
export interface BackgroundDrift {
  columns: number;
  rows: number;
  /** Frame numbers at which it is known, rising, at least two; straight lines between them. */
  nodeFrames: Float64Array;
  /** Electrons: one table per node after the other, each of `columns * rows` blocks, row by row. */
  blocksE: Float32Array;
}

/** Bits of `Spots.flags` and `Tracks.flags`. */
export const SPOT_EDGE = 1;
export const SPOT_OVERLAP = 2;
export const SPOT_SATURATED = 4;
export const SPOT_ELONGATED = 8;
/** The tracer was missed in this frame; the position is interpolated, not measured. */
export const POINT_BRIDGED = 16;
/** A person added the point, or moved it. */
export const POINT_ADDED = 32;
export const POINT_MOVED = 64;

/** Spots of a run of frames, ordered by frame, then y, then x. */
export interface Spots {
  count: number;
  frame: Uint32Array;
  xPx: Float32Array;
  yPx: Float32Array;
  /** Standard errors of the position, px. */
  sxPx: Float32Array;
  syPx: Float32Array;
  /** Photoelectrons in the spot. */
  brightness: Float32Array;
  /** Matched-filter response in units of the local noise. */
  snr: Float32Array;
  flags: Uint8Array;
}

/**
 * Tracks ordered by first frame, then y, then x of the first point; the track's number is its
 * index. Points of track `i` are `start[i] .. start[i + 1] - 1`, by frame, without holes: missed
 * frames are filled by interpolation and flagged `POINT_BRIDGED`.
 */
export interface Tracks {
  count: number;
  /** Length count + 1. */
  start: Uint32Array;
  frame: Uint32Array;
  xPx: Float32Array;
  yPx: Float32Array;
  sxPx: Float32Array;
  syPx: Float32Array;
  brightness: Float32Array;
  flags: Uint8Array;
}

export type Population = 'trapped' | 'free' | 'undecided';

/** Codes of `Populations.population`. */
export const POPULATIONS: readonly Population[] = ['trapped', 'free', 'undecided'];

/** Settings of an analysis with every value filled in. `tracking/recipe.ts` has limits and defaults. */
export interface Recipe {
  /** Standard deviation of a tracer's image, px. */
  spotSizePx: number;
  falseSpotsPerFrame: number;
  longestStepPx: number;
  mayVanishFrames: number;
  shortestTrackFrames: number;
  /** Camera counts per photoelectron. */
  gain: number;
  readNoise_e: number;
  effort: 'full' | 'quick';
  lagsFrames: number[];
  /** Least probability for a track to be called trapped (and 1 minus it, at most, to be called free). */
  trappedFrom: number;
  closestApproach_m: number;
  falseDiscoveryRate: number;
  bootstrapDraws: number;
  seed: number;
}

/** A recipe as a person writes it: any value may be left to the machine. */
export type RecipeRequest = { [K in keyof Recipe]?: Recipe[K] | 'auto' };

export interface Tracer {
  species?: string | null;
  diameter_m?: number | null;
  density_kg_m3?: number | null;
}

/** Conditions under which a stack was taken; names as in the published conditions file. */
export interface Conditions {
  pixelSize_m: number;
  frameInterval_s: number;
  exposure_s?: number | null;
  sheetThickness_m?: number | null;
  temperature_K?: number | null;
  heatFlux_W_m2?: number | null;
  /** Unit vector of the normal fluid in image axes. */
  flowDirection?: [number, number] | null;
  tracer?: Tracer | null;
  /** Walls of the channel in the image: ends x0, y0, x1, y1 of each, px. */
  wallsPx?: [number, number, number, number][] | null;
  /** gamma of L^1/2 = gamma (v_ns - v_0), s/m^2, and v_0, m/s, where the laboratory knows its own. */
  gamma_s_m2?: number | null;
  v0_m_s?: number | null;
}
