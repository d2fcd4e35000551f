import { describe, expect, test } from 'vitest';
import { blockGrid } from '@/tracking/image-model/block-grid';
import { BLOCK_SUMS, BlockSum } from '@/tracking/image-model/block-sums';
import type { FramePair } from '@/tracking/image-model/frame-pairs';
import type { Kernels } from '@/tracking/kernels/kernels';
import { plainKernels } from '@/tracking/kernels/plain-kernels';
import { createRandom, type Random } from '@/tracking/random';
import { simdKernels } from '@/tests/helpers/simd-kernels';

// The plain kernels are the oracle of the compiled ones, which sum in 32 bits within a block.

const SIZES: [width: number, height: number][] = [
  [1, 1],
  [1, 40],
  [40, 1],
  [2, 2],
  [3, 5],
  [8, 8],
  [9, 23],
  [16, 16],
  [17, 31],
  [24, 24],
  [63, 34],
  [130, 71],
];

const LEVEL = 140;
const NOISE = 6;
const SHIFTS = [1.5, -2.25] as const;
/** Sum of 4 x 4 pixels of noise reaches this once in a thousand. */
const SUSPECT = 3.3 * 4 * NOISE;

/** Noise about a level, bright tracers, and pixels that hold no number or the most a camera gives. */
function somePair(random: Random, width: number, height: number, alone: boolean): FramePair {
  const frame = () => {
    const counts = Float32Array.from({ length: width * height }, () => LEVEL + NOISE * random.normal());
    for (let k = 0; k < Math.ceil(counts.length / 90); k++) {
      counts[random.integer(counts.length)] += 300;
      counts[random.integer(counts.length)] = [Number.NaN, Infinity, -Infinity, 4095][random.integer(4)];
    }
    return { width, height, counts };
  };
  const first = frame();
  return { first, second: alone ? first : frame(), alone };
}

function gathered(kernels: Kernels, width: number, height: number) {
  const random = createRandom(width * 1000 + height);
  const grid = blockGrid(width, height);
  const images = kernels.forPairs(width, height);
  images.suspect.fill(SUSPECT);
  images.paintLevel(
    Float64Array.from({ length: grid.columns * grid.rows }, () => LEVEL + random.normal()),
    grid,
  );
  const pairs = [false, false, true].map((alone) => somePair(random, width, height, alone));
  const quiet = pairs.map((pair) => images.scan(pair, SHIFTS));
  const blocks = pairs.map((pair, p) => {
    const sums = new Float64Array(BLOCK_SUMS * grid.columns * grid.rows).fill(Number.NaN);
    images.sumBlocks(pair, SHIFTS, quiet[p], grid, sums);
    return sums;
  });
  return { level: images.level, sums: images.sums, quiet, blocks };
}

const simd = simdKernels();

function expectNear(values: ArrayLike<number>, expected: ArrayLike<number>, size: number): void {
  expect(values.length).toBe(expected.length);
  for (let i = 0; i < values.length; i++) {
    if (!(Math.abs(values[i] - expected[i]) <= 1e-6 * size)) {
      expect.fail(`Entry ${i} is ${values[i]} instead of ${expected[i]}, where values reach ${size}.`);
    }
  }
}

describe.each(SIZES)('for pairs of %d x %d px the compiled kernels', (width, height) => {
  const plain = gathered(plainKernels, width, height);
  const compiled = gathered(simd, width, height);

  test('paint the same level and set the same bins aside', () => {
    expectNear(compiled.level, plain.level, LEVEL);
    expect(compiled.quiet).toEqual(plain.quiet);
    expect(compiled.sums.quietPairs).toEqual(plain.sums.quietPairs);
  });

  test('gather the same by pixel and by bin', () => {
    const highestE = 4000;
    expectNear(compiled.sums.sum, plain.sums.sum, highestE);
    expectNear(compiled.sums.squares, plain.sums.squares, highestE ** 2);
    expectNear(compiled.sums.quietSum, plain.sums.quietSum, 40 * NOISE);
    expect(compiled.sums.highest).toBe(plain.sums.highest);
    expect(compiled.sums.highestPixels).toBe(plain.sums.highestPixels);
  });

  test('sum the same over blocks', () => {
    compiled.blocks.forEach((sums, p) => {
      for (let at = 0; at < sums.length; at += BLOCK_SUMS) {
        const oracle = plain.blocks[p].subarray(at, at + BLOCK_SUMS);
        expect(sums[at + BlockSum.pixels]).toBe(oracle[BlockSum.pixels]);
        const powers = [1, 1, 1, 2, 2, 3, 3, 2];
        const most = Math.max(1, oracle[BlockSum.pixels]);
        for (let k = 1; k < BLOCK_SUMS; k++) {
          expectNear([sums[at + k]], [oracle[k]], most * (4 * NOISE) ** powers[k]);
        }
      }
    });
  });
});

test('a frame without anything quiet makes no sums', () => {
  for (const kernels of [plainKernels, simd]) {
    const images = kernels.forPairs(20, 20);
    images.suspect.fill(SUSPECT);
    const counts = new Float32Array(400).fill(Number.NaN);
    const pair = {
      first: { width: 20, height: 20, counts },
      second: { width: 20, height: 20, counts },
      alone: true,
    };
    const quiet = images.scan(pair, [0, 0]);
    expect(Math.max(...quiet)).toBe(0);
    const grid = blockGrid(20, 20);
    const sums = new Float64Array(BLOCK_SUMS * grid.columns * grid.rows).fill(1);
    images.sumBlocks(pair, [0, 0], quiet, grid, sums);
    expect([...sums]).toEqual(new Array(sums.length).fill(0));
  }
});
