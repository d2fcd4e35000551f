import { describe, expect, test } from 'vitest';
import type { CountScale, FrameKernels, Kernels } from '@/tracking/kernels/kernels';
import { plainKernels } from '@/tracking/kernels/plain-kernels';
import { createRandom } from '@/tracking/random';
import { expectWithin } from '@/tests/helpers/expect-within';
import { simdKernels } from '@/tests/helpers/simd-kernels';

// The plain kernels are the oracle of the compiled ones; their own filter and peaks are held against slow
// sums and comparisons in tests/tracking/detection/matched-filter.test.ts.

const SCALE: CountScale = { offsetCounts: 100.25, perCount: 0.46, saturationCounts: 4095 };
const READ_VARIANCE = 2.25;

/** Rounding of 32-bit numbers is 6e-8 of each term; a response sums up to some hundred of order 1. */
const RESPONSE_REL = 4e-6;
const LIGHT_REL = 4e-7;

const SIZES: [width: number, height: number][] = [
  [1, 1],
  [1, 50],
  [50, 1],
  [2, 3],
  [3, 2],
  [4, 4],
  [5, 40],
  [15, 17],
  [16, 16],
  [17, 15],
  [31, 33],
  [64, 7],
  [127, 70],
  [130, 129],
  [333, 65],
];

interface Scene {
  counts: Float32Array;
  bad: Uint8Array;
  background: Float32Array;
}

/** Counts with spots of all brightnesses, saturated, bad, infinite and missing pixels. */
function scene(width: number, height: number, seed: number): Scene {
  const random = createRandom(seed);
  const pixels = width * height;
  const background = Float32Array.from({ length: pixels }, (_, i) => 5 + 20 * Math.sin(i / 400) ** 2);
  const counts = background.map((e) => Math.round(100 + 2 * (random.poisson(e) + 1.5 * random.normal())));
  const bad = new Uint8Array(pixels);
  for (let k = 0; k < Math.ceil(pixels / 40); k++) {
    const any = () => random.integer(pixels);
    counts[any()] += 2000 * random.uniform();
    counts[any()] = 4095;
    counts[any()] = 4094;
    counts[any()] = NaN;
    counts[any()] = Infinity;
    counts[any()] = -Infinity;
    counts[any()] = 3.4e38;
    bad[any()] = 1;
  }
  return { counts, bad, background };
}

function prepared(kernels: Kernels, width: number, height: number, seed: number, sigma: number) {
  const { counts, bad, background } = scene(width, height, seed);
  // A count of 3.4e38 makes a response that no tolerance can be told for.
  const bounded = counts.map((count) => (count > 1e9 && count < Infinity ? 3000 : count));
  const frame = kernels.forImages({ width, height, spotSigmaPx: sigma });
  frame.bad.set(bad);
  frame.background.set(background);
  frame.setFrame(bounded, SCALE);
  frame.respond({ scale: 1.07, shift: -0.3 }, READ_VARIANCE);
  return frame;
}

function expectNear(values: Float32Array, expected: Float32Array, rel: number): void {
  const size = expected.reduce((most, value) => Math.max(most, Math.abs(value)), 1);
  const worst = values.reduce((most, value, i) => Math.max(most, Math.abs(value - expected[i])), 0);
  expect(values.length).toBe(expected.length);
  expect(worst / size, `off by ${worst} where values reach ${size}`).toBeLessThanOrEqual(rel);
}

const simd = simdKernels();

describe.each(SIZES)('on a frame of %d x %d px the compiled kernels', (width, height) => {
  test('call the same pixels usable, whatever the counts', () => {
    const { counts, bad } = scene(width, height, 5);
    const [a, b] = [plainKernels, simd].map((kernels) => {
      const frame = kernels.forImages({ width, height, spotSigmaPx: 1.2 });
      frame.bad.set(bad);
      frame.setFrame(counts, SCALE);
      return frame;
    });
    expect(usableOf(b)).toEqual(usableOf(a));
    expect(usableOf(a)).toEqual([...a.plain!.usable].map((mark) => mark === 1));
  });

  test.each([0.5, 1.2, 2.6, 9])('give the same light and response for spots of %f px', (sigma) => {
    for (const seed of [1, 2]) {
      const plain = prepared(plainKernels, width, height, seed, sigma);
      const fast = prepared(simd, width, height, seed, sigma);
      expectNear(bareOf(fast), plain.plain!.bare, LIGHT_REL);
      expectNear(fast.response, plain.response, RESPONSE_REL);
    }
  });

  test('draw the same background from blocks', () => {
    const random = createRandom(4);
    for (const [columns, rows] of [
      [1, 1],
      [1, Math.ceil(height / 3)],
      [Math.ceil(width / 5), 2],
      [width, height],
    ]) {
      // Steep slopes, so that the lines carried on to the border fall below 0.
      const blocks = Float64Array.from({ length: columns * rows }, () => 20 * random.uniform());
      const [a, b] = [plainKernels, simd].map((k) => k.forImages({ width, height, spotSigmaPx: 1.2 }));
      for (const frame of [a, b]) frame.paintBackground(blocks, { columns, rows });
      expectNear(b.background, a.background, LIGHT_REL);
      expect(Math.min(...b.background)).toBeGreaterThanOrEqual(0);
    }
  });

  test('find the same peaks along with the response as afterwards', () => {
    const frame = prepared(simd, width, height, 3, 1.2);
    const finite = frame.background.fill(5);
    const random = createRandom(11);
    frame.setFrame(
      finite.map((light) => 100 + 2 * random.poisson(light)),
      SCALE,
    );
    for (const level of [-1, 0.5, 2, 3.5]) {
      frame.respond({ scale: 1, shift: 0 }, READ_VARIANCE);
      const afterwards = peaksOf(frame, level);
      frame.respond({ scale: 1, shift: 0 }, READ_VARIANCE, level);
      expect(peaksOf(frame, level)).toEqual(afterwards);
      // Asked for another level, it looks again, and then for this one once more.
      expect(peaksOf(frame, level + 1).length).toBeLessThanOrEqual(afterwards.length);
      expect(peaksOf(frame, level)).toEqual(afterwards);
    }
  });

  test('find the same peaks in the same picture, among equal neighbours too', () => {
    const random = createRandom(9);
    const [a, b] = [plainKernels, simd].map((k) => k.forImages({ width, height, spotSigmaPx: 1.2 }));
    for (let trial = 0; trial < 20; trial++) {
      // Few different values, so that neighbours are often equal; in some pictures nearly all are bright.
      const values = a.response.map(() => random.integer(trial % 2 ? 6 : 60));
      a.response.set(values);
      b.response.set(values);
      for (const level of [0, 3, 30, 100]) expect(peaksOf(b, level)).toEqual(peaksOf(a, level));
    }
  });
});

const pixelsOf = ({ response }: FrameKernels) => Array.from(response.keys());
const usableOf = (frame: FrameKernels) => pixelsOf(frame).map((pixel) => frame.isUsable(pixel));
const bareOf = (frame: FrameKernels) => Float32Array.from(pixelsOf(frame), (pixel) => frame.bareAt(pixel));

const peaksOf = (frame: FrameKernels, level: number): number[] => {
  const { at, count } = frame.findPeaks(level);
  return [...at.subarray(0, count)];
};

test.each([
  [1, 1],
  [9, 5],
  [150, 141],
  [301, 223],
])('the light level of a frame of %d x %d px is the same with both sets', (width, height) => {
  for (const seed of [1, 2, 3]) {
    const [a, b] = [plainKernels, simd].map((k) => prepared(k, width, height, seed, 1.2));
    for (const level of [1, 0]) {
      for (const frame of [a, b]) frame.background.forEach((_, i) => (frame.background[i] *= level));
      // Sums in 64 bits in another order.
      expectWithin(b.lightLevel(2.25).scale, a.lightLevel(2.25).scale, { rel: 1e-12 });
      expectWithin(b.lightLevel(2.25).shift, a.lightLevel(2.25).shift, { abs: 1e-11 });
    }
  }
});

test('every block of 2 x 2 pixels can hold a peak', () => {
  const [width, height] = [37, 21];
  const frame = simd.forImages({ width, height, spotSigmaPx: 1.2 });
  frame.response.forEach((_, i) => {
    const odd = (i % width) % 2 === 1 || Math.floor(i / width) % 2 === 1;
    frame.response[i] = odd ? 0 : 5;
  });
  // 19 columns and 11 rows are even.
  expect(frame.findPeaks(4).count).toBe(19 * 11);
});

test('what is not a number is no peak in either set', () => {
  for (const kernels of [plainKernels, simd]) {
    const frame = kernels.forImages({ width: 40, height: 3, spotSigmaPx: 1.2 });
    frame.response.fill(NaN);
    expect(frame.findPeaks(0).count).toBe(0);
  }
});

test('a frame leaves nothing behind for the next one', () => {
  const [width, height] = [70, 41];
  const once = prepared(simd, width, height, 3, 1.2);
  const again = simd.forImages({ width, height, spotSigmaPx: 1.2 });
  for (const seed of [8, 3]) {
    const { counts, bad, background } = scene(width, height, seed);
    again.bad.set(bad);
    again.background.set(background);
    const bounded = counts.map((count) => (count > 1e9 && count < Infinity ? 3000 : count));
    again.setFrame(bounded, SCALE);
    again.respond({ scale: 1.07, shift: -0.3 }, READ_VARIANCE);
  }
  expect(again.response).toEqual(once.response);
  expect(usableOf(again)).toEqual(usableOf(once));
});

test('a saturated pixel is not usable but stands in the response as bright as it looks', () => {
  for (const kernels of [plainKernels, simd]) {
    const frame = kernels.forImages({ width: 21, height: 21, spotSigmaPx: 1.2 });
    frame.background.fill(10);
    const counts = new Float32Array(21 * 21).fill(120);
    counts[10 * 21 + 10] = 4095;
    frame.setFrame(counts, { offsetCounts: 100, perCount: 0.5, saturationCounts: 4095 });
    frame.respond({ scale: 1, shift: 0 }, READ_VARIANCE);
    expect(frame.isUsable(10 * 21 + 10)).toBe(false);
    const { at, count } = frame.findPeaks(5);
    expect([...at.subarray(0, count)]).toEqual([10 * 21 + 10]);
  }
});

test('scratch memory lies apart from the planes, on a multiple of 16', () => {
  const frame = simd.forImages({ width: 33, height: 9, spotSigmaPx: 1.2, scratchBytes: 1000 });
  const { exports, scratchAt } = frame.compiled!;
  const scratch = new Uint8Array(exports.memory.buffer, scratchAt, 1000).fill(255);
  frame.background.fill(7);
  frame.setFrame(new Float32Array(33 * 9).fill(110), SCALE);
  frame.respond({ scale: 1, shift: 0 }, READ_VARIANCE);
  frame.findPeaks(0);
  expect(scratchAt % 16).toBe(0);
  expect(scratch.every((byte) => byte === 255)).toBe(true);
});
