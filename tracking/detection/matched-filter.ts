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
  const scaled = new Float64Array(reach + 1);

  const zeros = new Float32Array(width);
  const row = (y: number) => (y >= 0 && y < height ? rows.subarray(y * width, (y + 1) * width) : zeros);

  const apply = (noise: Float32Array, response: Float32Array) => {
    for (let y = 0; y < height; y++) {
      padded.set(noise.subarray(y * width, (y + 1) * width), reach);
      const out = rows.subarray(y * width, (y + 1) * width);
      correlateRow(padded, weight, reach, out);
      for (let x = 0; x < width; x++) out[x] *= correctX[x];
    }
    for (let y = 0; y < height; y++) {
      const out = response.subarray(y * width, (y + 1) * width);
      for (let k = 0; k <= reach; k++) scaled[k] = weight[k] * correctY[y];
      firstTaps(row(y), row(y - 1), row(y + 1), row(y - 2), row(y + 2), scaled, out);
      let k = 3;
      for (; k + 1 <= reach; k += 2) {
        twoTaps(row(y - k), row(y + k), row(y - k - 1), row(y + k + 1), scaled[k], scaled[k + 1], out);
      }
      if (k <= reach) twoTaps(row(y - k), row(y + k), zeros, zeros, scaled[k], 0, out);
    }
  };
  return { kernel, apply };
}

/** Correlates a row that has `reach` zeros at both ends; taps are taken in pairs to spare memory traffic. */
function correlateRow(padded: Float32Array, weight: Float64Array, reach: number, out: Float32Array): void {
  const pixels = out.length;
  const w0 = weight[0];
  const w1 = weight[1];
  for (let x = 0, c = reach; x < pixels; x++, c++) {
    out[x] = w0 * padded[c] + w1 * (padded[c - 1] + padded[c + 1]);
  }
  let k = 2;
  for (; k + 1 <= reach; k += 2) {
    const a = weight[k];
    const b = weight[k + 1];
    for (let x = 0, c = reach; x < pixels; x++, c++) {
      out[x] += a * (padded[c - k] + padded[c + k]) + b * (padded[c - k - 1] + padded[c + k + 1]);
    }
  }
  if (k <= reach) {
    const a = weight[k];
    for (let x = 0, c = reach; x < pixels; x++, c++) out[x] += a * (padded[c - k] + padded[c + k]);
  }
}

/** Taps 0, 1 and 2 of the correlation down the columns; kernels reach 2 rows at least. */
function firstTaps(
  middle: Float32Array,
  up1: Float32Array,
  down1: Float32Array,
  up2: Float32Array,
  down2: Float32Array,
  weight: Float64Array,
  out: Float32Array,
): void {
  const w0 = weight[0];
  const w1 = weight[1];
  const w2 = weight[2];
  for (let x = 0; x < out.length; x++) {
    out[x] = w0 * middle[x] + w1 * (up1[x] + down1[x]) + w2 * (up2[x] + down2[x]);
  }
}

function twoTaps(
  upA: Float32Array,
  downA: Float32Array,
  upB: Float32Array,
  downB: Float32Array,
  a: number,
  b: number,
  out: Float32Array,
): void {
  for (let x = 0; x < out.length; x++) out[x] += a * (upA[x] + downA[x]) + b * (upB[x] + downB[x]);
}

/** Growing list of places in an image. */
export interface PeakList {
  count: number;
  at: Int32Array;
}

/**
 * Pixels from `level` on that none of their eight neighbours exceeds; of equal neighbours the first
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
      if (!(value >= level)) continue;
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
