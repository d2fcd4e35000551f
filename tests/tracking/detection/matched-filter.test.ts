import { expect, test } from 'vitest';
import { createMatchedFilter, findPeaks, type PeakList } from '@/tracking/detection/matched-filter';
import { createSpotKernel } from '@/tracking/detection/spot-kernel';
import { createRandom } from '@/tracking/random';
import { expectWithin } from '@/tests/helpers/expect-within';

function noiseImage(pixels: number, seed: number): Float32Array {
  const random = createRandom(seed);
  return Float32Array.from({ length: pixels }, () => random.normal());
}

/** The same correlation, pixel by pixel over the two-dimensional kernel as far as the image goes. */
function slowFilter(noise: Float32Array, width: number, height: number, sigma: number): Float64Array {
  const { reach, weight } = createSpotKernel(sigma);
  return Float64Array.from(noise, (_, at) => {
    let sum = 0;
    let squares = 0;
    for (let j = -reach; j <= reach; j++) {
      for (let i = -reach; i <= reach; i++) {
        const x = (at % width) + i;
        const y = Math.floor(at / width) + j;
        if (x < 0 || y < 0 || x >= width || y >= height) continue;
        const w = weight[Math.abs(i)] * weight[Math.abs(j)];
        sum += w * noise[y * width + x];
        squares += w * w;
      }
    }
    return sum / Math.sqrt(squares);
  });
}

test.each([0.5, 0.8, 1.2, 1.5, 2.6])(
  'the filter of %f px equals a plain sum over the kernel, at borders too',
  (sigma) => {
    for (const [width, height] of [
      [23, 17],
      [5, 40],
      [3, 2],
    ]) {
      const noise = noiseImage(width * height, 3);
      const response = new Float32Array(width * height);
      createMatchedFilter(width, height, sigma).apply(noise, response);
      const slow = slowFilter(noise, width, height, sigma);
      for (let i = 0; i < slow.length; i++) expectWithin(response[i], slow[i], { abs: 1e-5 });
    }
  },
);

test('noise of variance 1 keeps variance 1', () => {
  const noise = noiseImage(300 * 300, 8);
  const response = new Float32Array(noise.length);
  createMatchedFilter(300, 300, 1.2).apply(noise, response);
  const variance = response.reduce((sum, value) => sum + value * value, 0) / response.length;
  // Neighbours are correlated over about 4 pi s^2 = 18 pixels: 5000 independent values, 2 % per standard error.
  expectWithin(variance, 1, { abs: 0.08 });
});

test('peaks are the pixels that no neighbour exceeds, found by comparing all', () => {
  const random = createRandom(6);
  for (let trial = 0; trial < 60; trial++) {
    const width = 1 + random.integer(12);
    const height = 1 + random.integer(12);
    // Few different values, so that neighbours are often equal.
    const image = Float32Array.from({ length: width * height }, () => random.integer(6));
    const peaks: PeakList = { count: 0, at: new Int32Array(1) };
    findPeaks(image, width, height, 3, peaks);
    const expected = Array.from(image.keys()).filter((at) => {
      if (image[at] < 3) return false;
      return Array.from(image.keys()).every((other) => {
        const near =
          Math.abs((other % width) - (at % width)) <= 1 &&
          Math.abs(Math.floor(other / width) - Math.floor(at / width)) <= 1;
        if (!near || other === at) return true;
        return image[other] < image[at] || (image[other] === image[at] && other > at);
      });
    });
    expect([...peaks.at.subarray(0, peaks.count)]).toEqual(expected);
  }
});
