import { pixelShares } from '../pixel-gaussian';

/** A spot's shape along one axis, centred on a pixel, scaled so that the sum of squares is 1. */
export interface SpotKernel {
  reach: number;
  /** Weights at distance 0 .. reach; the shape is symmetric. */
  weight: Float64Array;
  /** Sum of squares of the shape before scaling: brightness = response * noise / squares. */
  squares: number;
}

/** Farther out than this the shape adds nothing to the response. */
const KERNEL_REACH_SIGMAS = 3;

export function createSpotKernel(spotSigmaPx: number): SpotKernel {
  const reach = Math.max(2, Math.ceil(KERNEL_REACH_SIGMAS * spotSigmaPx));
  const side = 2 * reach + 1;
  const share = new Float64Array(side);
  const unused = new Float64Array(side);
  pixelShares(reach, spotSigmaPx, side, share, unused, unused, 0);
  let squares = 0;
  for (const value of share) squares += value * value;
  const weight = new Float64Array(reach + 1);
  for (let k = 0; k <= reach; k++) weight[k] = share[reach + k] / Math.sqrt(squares);
  return { reach, weight, squares };
}

/**
 * By how much the response must be raised where the image ends within the kernel's reach, so that
 * its noise is 1 there too. Length `pixels`.
 */
export function edgeCorrection({ reach, weight }: SpotKernel, pixels: number): Float32Array {
  const correction = new Float32Array(pixels);
  for (let i = 0; i < pixels; i++) {
    let squares = 0;
    for (let k = -reach; k <= reach; k++) {
      if (i + k >= 0 && i + k < pixels) squares += weight[Math.abs(k)] ** 2;
    }
    correction[i] = 1 / Math.sqrt(squares);
  }
  return correction;
}
