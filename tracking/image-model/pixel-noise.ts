/** What the noise of a pixel of one frame follows from. */
export interface PixelNoise {
  backgroundE: Float32Array;
  /** Gain squared, counts^2 per electron^2. */
  square: number;
  /** Electrons^2. */
  readVariance: number;
}

/** Expected variance of a pixel of one frame, counts^2; never 0. */
export function varianceOf({ backgroundE, square, readVariance }: PixelNoise, pixel: number): number {
  return square * (backgroundE[pixel] + readVariance) + 1e-12;
}
