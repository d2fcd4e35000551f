import { createSpotKernel, edgeCorrection, type SpotKernel } from './spot-kernel';

/** Correlates whole images with the spot; keeps its arrays, so use one per size of image. */
export interface MatchedFilter {
  kernel: SpotKernel;
  /**
   * @param noise image of independent noise of variance 1 (0 where a pixel can't be used).
   * @param response receives noise of variance 1 in which a spot stands out the most.
   */
  apply(noise: Float32Array, response: Float32Array): void;
}

export function createMatchedFilter(width: number, height: number, spotSigmaPx: number): MatchedFilter {
  const kernel = createSpotKernel(spotSigmaPx);
  const { reach, weight } = kernel;
  const correctX = edgeCorrection(kernel, width);
  const correctY = edgeCorrection(kernel, height);
  // Rows with room for zeros at both ends, so that the inner loop needs no bounds.
  const stride = width + 2 * reach;
  const padded = new Float32Array(stride);
  const rows = new Float32Array(width * height);

  const apply = (noise: Float32Array, response: Float32Array) => {
    for (let y = 0; y < height; y++) {
      const row = y * width;
      padded.set(noise.subarray(row, row + width), reach);
      const w0 = weight[0];
      for (let x = 0; x < width; x++) rows[row + x] = w0 * padded[x + reach];
      for (let k = 1; k <= reach; k++) {
        const w = weight[k];
        const left = reach - k;
        const right = reach + k;
        for (let x = 0; x < width; x++) rows[row + x] += w * (padded[x + left] + padded[x + right]);
      }
      for (let x = 0; x < width; x++) rows[row + x] *= correctX[x];
    }
    for (let y = 0; y < height; y++) {
      const row = y * width;
      const corrected = correctY[y];
      const w0 = weight[0] * corrected;
      for (let x = 0; x < width; x++) response[row + x] = w0 * rows[row + x];
      for (let k = 1; k <= reach; k++) {
        const w = weight[k] * corrected;
        const up = y - k >= 0 ? row - k * width : -1;
        const down = y + k < height ? row + k * width : -1;
        if (up >= 0 && down >= 0) {
          for (let x = 0; x < width; x++) response[row + x] += w * (rows[up + x] + rows[down + x]);
        } else if (up >= 0 || down >= 0) {
          const only = Math.max(up, down);
          for (let x = 0; x < width; x++) response[row + x] += w * rows[only + x];
        }
      }
    }
  };
  return { kernel, apply };
}

/** Growing list of places in an image. */
export interface PeakList {
  count: number;
  at: Int32Array;
}

/**
 * Pixels above `level` that none of their eight neighbours exceeds; of equal neighbours the first
 * in reading order counts.
 */
export function findPeaks(
  response: Float32Array,
  width: number,
  height: number,
  level: number,
  peaks: PeakList,
): void {
  peaks.count = 0;
  for (let y = 0; y < height; y++) {
    for (let at = y * width, end = at + width; at < end; at++) {
      const value = response[at];
      if (value < level) continue;
      const x = at - y * width;
      const left = x > 0;
      const right = x < width - 1;
      if (left && response[at - 1] >= value) continue;
      if (right && response[at + 1] > value) continue;
      if (y > 0) {
        const up = at - width;
        if (response[up] >= value || (left && response[up - 1] >= value)) continue;
        if (right && response[up + 1] >= value) continue;
      }
      if (y < height - 1) {
        const down = at + width;
        if (response[down] > value || (left && response[down - 1] > value)) continue;
        if (right && response[down + 1] > value) continue;
      }
      if (peaks.count === peaks.at.length) {
        const wider = new Int32Array(2 * peaks.count + 64);
        wider.set(peaks.at);
        peaks.at = wider;
      }
      peaks.at[peaks.count++] = at;
    }
  }
}
