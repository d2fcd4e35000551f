import { expect, test } from 'vitest';
import { matchPoints } from '@/tracking/assess/point-match';
import { chiSquareTail } from '@/tracking/estimates/random-effects';
import { createRandom, mixSeed } from '@/tracking/random';
import { SceneBuilder } from '@/tracking/simulate/scene-builder';
import { mixedCamera } from '@/tracking/simulate/mixed-scene';
import { runRecording } from '@/tracking/studies/recording-run';

// Pixel locking: positions that prefer a part of the pixel. It shows in the histogram of fractional parts, which is
// flat where the truth is spread evenly (Crocker & Grier, J. Colloid Interface Sci. 179, 298, 1996, look at the same).

const SIZE_PX = 256;
const FRAMES = 40;
const SPACING_PX = 16;
/** Spots jump about a whole number of pixels, so that every part of a pixel is as likely. */
const JUMP_PX = 8;
const BINS = 20;
/** A histogram that is flat fails once in 10,000 times; seeds are fixed. */
const CHANCE_LEAST = 1e-4;
const MINUTES = 60_000;

/** Lone spots at places of a grid, each anywhere within a square of whole pixels, anew in every frame. */
function jumpingSpots(seed: number) {
  const random = createRandom(mixSeed(seed, 0x10c));
  const builder = new SceneBuilder(SIZE_PX, SIZE_PX, FRAMES);
  for (let y = SPACING_PX; y <= SIZE_PX - SPACING_PX; y += SPACING_PX) {
    for (let x = SPACING_PX; x <= SIZE_PX - SPACING_PX; x += SPACING_PX) {
      const along = (at: number) =>
        Float64Array.from({ length: FRAMES }, () => at + JUMP_PX * (random.uniform() - 0.5));
      builder.add(0, -1, along(x), along(y), new Uint8Array(FRAMES).fill(1), 700);
    }
  }
  return builder.build(Number.NaN, []);
}

/** Chance of a histogram of fractional parts as uneven as this, were they spread evenly. */
function flatness(positionsPx: readonly number[]): number {
  const counts = new Array<number>(BINS).fill(0);
  for (const x of positionsPx) counts[Math.min(BINS - 1, Math.floor(BINS * (x - Math.floor(x))))]++;
  const mean = positionsPx.length / BINS;
  return chiSquareTail(
    counts.reduce((sum, n) => sum + (n - mean) ** 2 / mean, 0),
    BINS - 1,
  );
}

/** Chance of mean errors as far from 0 as these, by part of the pixel, were there no bias anywhere. */
function unbiasedness(truePx: readonly number[], errorPx: readonly number[]): number {
  const sums = Array.from({ length: BINS }, () => ({ sum: 0, squares: 0 }));
  truePx.forEach((x, i) => {
    const bin = sums[Math.min(BINS - 1, Math.floor(BINS * (x - Math.floor(x))))];
    bin.sum += errorPx[i];
    bin.squares += errorPx[i] ** 2;
  });
  const statistic = sums.reduce((total, { sum, squares }) => total + (sum * sum) / squares, 0);
  return chiSquareTail(statistic, BINS);
}

test.each([0.8, 1.2, 2])(
  'spots of %d px are found on every part of the pixel as often, and without bias on any',
  (spotSigmaPx) => {
    const scene = jumpingSpots(Math.round(10 * spotSigmaPx));
    const { spots } = runRecording(scene, { ...mixedCamera(51), spotSigmaPx });
    const partner = matchPoints(scene, spots, FRAMES, 1);
    const pairs = Array.from(partner.keys()).filter((i) => partner[i] >= 0);
    expect(pairs.length).toBeGreaterThan(7000);
    for (const axis of ['xPx', 'yPx'] as const) {
      const truth = pairs.map((i) => scene[axis][i]);
      const found = pairs.map((i) => spots[axis][partner[i]]);
      expect(flatness(truth), 'the truth itself').toBeGreaterThan(CHANCE_LEAST);
      expect(flatness(found), `${axis} of ${spotSigmaPx} px`).toBeGreaterThan(CHANCE_LEAST);
      const error = found.map((x, i) => x - truth[i]);
      expect(unbiasedness(truth, error), `${axis} of ${spotSigmaPx} px`).toBeGreaterThan(CHANCE_LEAST);
    }
  },
  2 * MINUTES,
);

test('the histogram would show positions drawn to the middle of pixels by 0.03 px', () => {
  const random = createRandom(52);
  const truth = Array.from({ length: 8000 }, () => 100 * random.uniform());
  const locked = truth.map((x) => x - 0.03 * Math.sin(2 * Math.PI * x) + 0.1 * random.normal());
  expect(flatness(truth.map((x) => x + 0.1 * random.normal()))).toBeGreaterThan(CHANCE_LEAST);
  expect(flatness(locked)).toBeLessThan(CHANCE_LEAST);
});
