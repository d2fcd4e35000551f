import type { LightLevel } from '../detection/light-level';
import type { SpotKernel } from '../detection/spot-kernel';
import type { PairKernels } from './pair-kernels';
import type { SimdExports } from './simd-exports';

/**
 * What detection and measuring do with every pixel of a frame. Two sets compute the same: plain TypeScript, which runs
 * everywhere and is the oracle, and WebAssembly with vectors of four numbers, which is several times as fast.
 */
export interface Kernels {
  readonly name: 'plain' | 'simd';
  /** Memory and operations for frames of one size; worth keeping from frame to frame. */
  forImages(spec: ImageSpec): FrameKernels;
  /** Memory and operations for measuring the image from pairs of frames of one size. */
  forPairs(width: number, height: number): PairKernels;
}

export interface ImageSpec {
  width: number;
  height: number;
  spotSigmaPx: number;
  /** Bytes that the caller wants in the same memory as the planes, for kernels of its own. */
  scratchBytes?: number;
}

/** Counts of a frame in photoelectrons: (counts - offset) * perCount. */
export interface CountScale {
  offsetCounts: number;
  /** Photoelectrons per count. */
  perCount: number;
  /** Count at which the camera saturates, or Infinity. */
  saturationCounts: number;
}

/** Places in an image, by y, then x. */
export interface Peaks {
  count: number;
  /** Entries 0 .. count - 1 are valid, until the next search. */
  at: Int32Array;
}

/**
 * The frame at hand, plane by plane: entry y * width + x belongs to pixel (x, y). The arrays stay the same
 * from frame to frame.
 */
export interface FramePlanes {
  /** Filled by the caller, before the first frame: 1 where a pixel can't be trusted. */
  readonly bad: Uint8Array;
  /** Filled by the caller, for all frames or for each: light without spots of the whole stack, electrons. */
  readonly background: Float32Array;
  /** Noise of variance 1 in which a spot stands out the most. */
  readonly response: Float32Array;
  /** Expected light of a pixel without spots, electrons >= 0; known once there is a response. */
  bareAt(pixel: number): number;
  /** Whether a pixel counts; not where it is bad, holds no number or is saturated. */
  isUsable(pixel: number): boolean;
}

/** What the plain kernels write down, where the compiled ones work it out from the counts when it is needed. */
export interface PlainPlanes {
  readonly electrons: Float32Array;
  /** 1 where a pixel counts. */
  readonly usable: Uint8Array;
  readonly bare: Float32Array;
  /** Expected light with the spots that are known; kept by the fits. */
  readonly model: Float32Array;
}

/**
 * Operations on frames of one size. Each frame goes through them in this order; the background may stay.
 * Either `compiled` or `plain` is there for the fits to work in.
 */
export interface FrameKernels extends FramePlanes {
  readonly width: number;
  readonly height: number;
  readonly kernel: SpotKernel;
  readonly compiled: CompiledPlanes | null;
  readonly plain: PlainPlanes | null;
  /**
   * Fills `background` along straight lines between the middles of blocks, nowhere below 0.
   *
   * @param blocks electrons, row by row
   */
  paintBackground(blocks: Float64Array, grid: { columns: number; rows: number }): void;
  /** Takes a frame in; the counts are copied. */
  setFrame(counts: Float32Array, scale: CountScale): void;
  /** Light of the frame relative to `background`; see `measureLightLevel`. */
  lightLevel(readVariance: number): LightLevel;
  /**
   * Fills `response`, the frame in units of its own noise correlated with the spot; what is expected without spots
   * is max(0, scale * background + shift). Bad pixels count as dark, saturated ones as bright as they look.
   *
   * @param peakLevel where `findPeaks` will be asked for peaks from here on: they may be found along with the response
   */
  respond(light: LightLevel, readVariance: number, peakLevel?: number): void;
  /**
   * Pixels of `response` from `level` on that none of their eight neighbours exceeds; of equal neighbours
   * the first in reading order counts.
   */
  findPeaks(level: number): Peaks;
}

/** Byte addresses in the memory of an instance of the compiled kernels. */
export interface CompiledPlanes {
  readonly exports: SimdExports;
  readonly factsAt: number;
  readonly countsAt: number;
  readonly badAt: number;
  readonly backgroundAt: number;
  readonly spotLightAt: number;
  readonly paintedAt: number;
  /** `scratchBytes` of the spec, on a multiple of 16. */
  readonly scratchAt: number;
}
