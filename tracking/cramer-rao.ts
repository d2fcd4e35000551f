import { choleskyFactor, choleskyInverseDiagonal } from './detection/cholesky';
import { pixelShares } from './pixel-gaussian';

/** Half the side of the square of pixels that the bound is computed from. */
const REACH_PX = 12;
const SIDE = 2 * REACH_PX + 1;
const PARAMETERS = 4;

/** Least standard deviations of an unbiased position, px. */
export interface PositionBound {
  sxPx: number;
  syPx: number;
}

/** Part of the square of pixels that exists, relative to the pixel that the spot is on. */
export interface PixelRange {
  left: number;
  right: number;
  top: number;
  bottom: number;
}

const WHOLE: PixelRange = { left: -REACH_PX, right: REACH_PX, top: -REACH_PX, bottom: REACH_PX };

/**
 * Cramer-Rao bound of the position of a pixel-integrated Gaussian spot with x, y, brightness and
 * background all unknown: I_ij = sum_k (d mu_k / d theta_i)(d mu_k / d theta_j) / (mu_k + r^2)
 * over 25 x 25 pixels (Ober, Ram & Ward, Biophys. J. 86, 1185, 2004).
 *
 * @param xPx place of the centre relative to the middle of its pixel, likewise `yPx`.
 * @param readVariance square of the read noise, electrons^2.
 */
export function positionBound(
  brightnessE: number,
  backgroundE: number,
  spotSigmaPx: number,
  readVariance = 0,
  xPx = 0,
  yPx = 0,
  range: PixelRange = WHOLE,
): PositionBound {
  const px = new Float64Array(SIDE);
  const dx = new Float64Array(SIDE);
  const py = new Float64Array(SIDE);
  const dy = new Float64Array(SIDE);
  const unused = new Float64Array(SIDE);
  pixelShares(xPx + REACH_PX, spotSigmaPx, SIDE, px, dx, unused, 0);
  pixelShares(yPx + REACH_PX, spotSigmaPx, SIDE, py, dy, unused, 0);
  const information = new Float64Array(PARAMETERS * PARAMETERS);
  const slope = new Float64Array(PARAMETERS);
  const top = Math.max(-REACH_PX, range.top);
  const left = Math.max(-REACH_PX, range.left);
  for (let y = top; y <= Math.min(REACH_PX, range.bottom); y++) {
    for (let x = left; x <= Math.min(REACH_PX, range.right); x++) {
      const i = x + REACH_PX;
      const j = y + REACH_PX;
      slope[0] = brightnessE * dx[i] * py[j];
      slope[1] = brightnessE * px[i] * dy[j];
      slope[2] = px[i] * py[j];
      slope[3] = 1;
      const weight = 1 / (brightnessE * slope[2] + backgroundE + readVariance);
      for (let a = 0; a < PARAMETERS; a++) {
        for (let b = 0; b <= a; b++) information[a * PARAMETERS + b] += weight * slope[a] * slope[b];
      }
    }
  }
  if (!choleskyFactor(information, PARAMETERS, PARAMETERS)) return { sxPx: Infinity, syPx: Infinity };
  const variance = new Float64Array(PARAMETERS);
  choleskyInverseDiagonal(information, PARAMETERS, PARAMETERS, slope, variance);
  return { sxPx: Math.sqrt(variance[0]), syPx: Math.sqrt(variance[1]) };
}
