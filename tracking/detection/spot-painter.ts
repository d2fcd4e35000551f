import { pixelShares } from '../pixel-gaussian';

/** Adds the light of spots to an image, or takes it away again (negative brightness). */
export interface SpotPainter {
  /** @param sigmaPx of this spot, where it is not the one of all */
  paint(image: Float32Array, x: number, y: number, brightness: number, sigmaPx?: number): void;
}

export function createSpotPainter(
  width: number,
  height: number,
  spotSigmaPx: number,
  reach: number,
): SpotPainter {
  const side = 2 * reach + 1;
  const shareX = new Float64Array(side);
  const shareY = new Float64Array(side);
  const unused = new Float64Array(side);
  const paint: SpotPainter['paint'] = (image, x, y, brightness, sigmaPx = spotSigmaPx) => {
    const x0 = Math.round(x) - reach;
    const y0 = Math.round(y) - reach;
    pixelShares(x - x0, sigmaPx, side, shareX, unused, unused, 0);
    pixelShares(y - y0, sigmaPx, side, shareY, unused, unused, 0);
    const left = Math.max(0, -x0);
    const right = Math.min(side, width - x0);
    for (let j = Math.max(0, -y0); j < side && y0 + j < height; j++) {
      const row = (y0 + j) * width + x0;
      const light = brightness * shareY[j];
      for (let i = left; i < right; i++) image[row + i] += light * shareX[i];
    }
  };
  return { paint };
}
