import { createSpotKernel } from './spot-kernel';
import type { FitWindow } from './fit-window';
import type { ResidualPeak } from './spot-fits';

/** Relative error of the assumed spot shape that the residual of a bright spot must not be taken for a spot. */
export const SHAPE_ERROR = 0.08;
/** Least variance of a pixel without light and read noise: a response to nothing but light is finite too. */
export const DARK_VARIANCE_E2 = 1e-3;

/** Looks for spots in the residual of a window; keeps its arrays. */
export interface SecondLook {
  /**
   * @param model expected photoelectrons with all fitted spots, of the whole image.
   * @param bare the same without any spot, to tell how much of the light is spots.
   * @returns the strongest peak; the same object is reused.
   */
  strongest(window: FitWindow, model: Float32Array, bare: Float32Array, imageWidth: number): ResidualPeak;
}

export function createSecondLook(spotSigmaPx: number, readVariance: number): SecondLook {
  const { reach, weight, squares } = createSpotKernel(spotSigmaPx);
  let noise = new Float64Array(1024);
  let rows = new Float64Array(1024);
  const peak: ResidualPeak = { response: 0, xPx: 0, yPx: 0, brightness: 0 };

  const strongest = (window: FitWindow, model: Float32Array, bare: Float32Array, imageWidth: number) => {
    const { width, height, data, used } = window;
    const pixels = width * height;
    if (noise.length < pixels) {
      noise = new Float64Array(2 * pixels);
      rows = new Float64Array(2 * pixels);
    }
    for (let y = 0, k = 0; y < height; y++) {
      let at = (window.y0 + y) * imageWidth + window.x0;
      for (let x = 0; x < width; x++, at++, k++) {
        const expected = model[at] + readVariance;
        const doubt = SHAPE_ERROR * (model[at] - bare[at]);
        const variance = Math.max(DARK_VARIANCE_E2, expected + doubt * doubt);
        noise[k] = used[k] === 1 ? (data[k] - expected) / Math.sqrt(variance) : 0;
      }
    }
    for (let y = 0; y < height; y++) {
      for (let x = 0; x < width; x++) {
        let sum = weight[0] * noise[y * width + x];
        for (let k = 1; k <= reach; k++) {
          if (x - k >= 0) sum += weight[k] * noise[y * width + x - k];
          if (x + k < width) sum += weight[k] * noise[y * width + x + k];
        }
        rows[y * width + x] = sum;
      }
    }
    peak.response = -Infinity;
    for (let y = 1; y < height - 1; y++) {
      for (let x = 1; x < width - 1; x++) {
        if (used[y * width + x] === 0) continue;
        let sum = weight[0] * rows[y * width + x];
        for (let k = 1; k <= reach; k++) {
          if (y - k >= 0) sum += weight[k] * rows[(y - k) * width + x];
          if (y + k < height) sum += weight[k] * rows[(y + k) * width + x];
        }
        if (sum > peak.response) {
          peak.response = sum;
          peak.xPx = window.x0 + x;
          peak.yPx = window.y0 + y;
        }
      }
    }
    if (peak.response > 0) {
      const at = peak.yPx * imageWidth + peak.xPx;
      peak.brightness = (peak.response * Math.sqrt(model[at] + readVariance)) / squares;
    }
    return peak;
  };
  return { strongest };
}
