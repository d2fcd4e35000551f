import { describe, expect, test } from 'vitest';
import { simdKernels } from '@/tests/helpers/simd-kernels';
import type { SpotFits } from '@/tracking/detection/spot-fits';
import { createSpotPainter } from '@/tracking/detection/spot-painter';
import { jointFitRoom } from '@/tracking/kernels/joint-fit-memory';
import { createSpotFits } from '@/tracking/kernels/create-spot-fits';
import type { CompiledPlanes, FrameKernels, PlainPlanes } from '@/tracking/kernels/kernels';
import { plainKernels } from '@/tracking/kernels/plain-kernels';
import { createRandom, type Random } from '@/tracking/random';

// The plain fits, in double precision, are the oracle of the compiled ones, which work in single precision and
// may stop one step earlier: steps below 0.006 px end a fit, and the error left is a small part of the step.

const READ_VARIANCE = 2.25;
const BACKGROUND_E = 12;
const OFFSET_SPREAD_E = 2;

interface Place {
  x: number;
  y: number;
  n: number;
}

interface Both {
  plain: SpotFits;
  simd: SpotFits;
  /** What the fits paint on. */
  planes: { plain: PlainPlanes; compiled: CompiledPlanes };
  /** Sets the frame of both: noise on the light of the spots; pixels without use by chance. */
  show(spots: Place[], random: Random, uselessShare?: number): void;
}

function both(width: number, height: number, spotSigmaPx = 1.2): Both {
  const reach = Math.max(2, Math.ceil(2.8 * spotSigmaPx));
  const kernels = simdKernels();
  const tapReach = plainKernels.forImages({ width, height, spotSigmaPx }).kernel.reach;
  const room = jointFitRoom(reach, tapReach, 5 * spotSigmaPx);
  const spec = { width, height, spotSigmaPx, scratchBytes: room.bytes };
  const frames: FrameKernels[] = [plainKernels.forImages(spec), kernels.forImages(spec)];
  const options = { width, height, spotSigmaPx, readVariance: READ_VARIANCE, reach, stepDonePx: 0.006 };
  if (!frames[1].compiled) throw new Error('The compiled kernels have no memory for images this small.');
  const fits = frames.map((frame) => createSpotFits(frame, options, room));
  const painter = createSpotPainter(width, height, spotSigmaPx, Math.ceil(5 * spotSigmaPx));
  return {
    plain: fits[0],
    simd: fits[1],
    planes: { plain: frames[0].plain!, compiled: frames[1].compiled },
    show(spots, random, uselessShare = 0) {
      const light = new Float32Array(width * height).fill(BACKGROUND_E);
      for (const { x, y, n } of spots) painter.paint(light, x, y, n);
      // What the compiled kernels work out from counts are numbers of 32 bits.
      const counts = Float32Array.from(light, (expected) => {
        const electrons = random.poisson(expected) + Math.sqrt(READ_VARIANCE) * random.normal();
        return random.uniform() < uselessShare ? Number.NaN : electrons;
      });
      for (const frame of frames) {
        frame.background.fill(BACKGROUND_E);
        frame.setFrame(counts, { offsetCounts: 0, perCount: 1, saturationCounts: Infinity });
        frame.respond({ scale: 1, shift: 0 }, READ_VARIANCE);
      }
      for (const one of fits) one.clear();
    },
  };
}

/** Fits the spots from places a little off, and returns whether that converged. */
function fit(fits: SpotFits, spots: Place[], off: number): boolean {
  spots.forEach(({ x, y, n }, k) => {
    fits.x[k] = fits.centreX[k] = x + off;
    fits.y[k] = fits.centreY[k] = y - 0.7 * off;
    fits.n[k] = 1.15 * n;
  });
  fits.load(spots.length);
  return fits.run(spots.length, OFFSET_SPREAD_E);
}

function expectSameFit({ plain, simd }: Both, count: number): void {
  for (let k = 0; k < count; k++) {
    const near = (a: number, b: number, error: number) =>
      expect(Math.abs(a - b)).toBeLessThan(Math.max(1e-3, 0.02 * error));
    near(simd.x[k], plain.x[k], plain.sx[k]);
    near(simd.y[k], plain.y[k], plain.sy[k]);
    for (const name of ['sx', 'sy', 'sn'] as const) {
      expect(Math.abs(simd[name][k] / plain[name][k] - 1), name).toBeLessThan(0.01);
    }
    expect(Math.abs(simd.n[k] - plain.n[k])).toBeLessThan(0.02 * plain.sn[k] + 1e-3 * plain.n[k]);
  }
}

const group = (random: Random, count: number, x: number, y: number, faintest: number): Place[] =>
  Array.from({ length: count }, (_, k) => ({
    x: x + 3.4 * k + 0.8 * random.uniform(),
    y: y + 2 * random.uniform(),
    n: faintest * (1 + 3 * random.uniform()),
  }));

describe('compiled fits agree with the plain ones', () => {
  test.each([1, 2, 3, 4, 6])('on groups of %d', (count) => {
    const pair = both(64, 40);
    for (let seed = 0; seed < 80; seed++) {
      const random = createRandom(100 * count + seed);
      const spots = group(random, count, 18, 18, 400);
      pair.show(spots, random);
      expect(fit(pair.simd, spots, 0.2)).toBe(fit(pair.plain, spots, 0.2));
      expectSameFit(pair, count);
    }
  });

  test('on spots of 20 to 2,000,000 electrons', () => {
    const pair = both(40, 40);
    for (const n of [20, 60, 200, 2000, 20_000, 2_000_000]) {
      for (let seed = 0; seed < 20; seed++) {
        const random = createRandom(31 * seed + n);
        const spots = group(random, 1, 18, 18, n);
        pair.show(spots, random);
        if (!fit(pair.plain, spots, 0.1) || !fit(pair.simd, spots, 0.1)) continue;
        expectSameFit(pair, 1);
      }
    }
  });

  test('at borders and corners, and with pixels that are of no use', () => {
    const pair = both(33, 27);
    let converged = 0;
    for (let seed = 0; seed < 200; seed++) {
      const random = createRandom(seed);
      const [x, y] = [33 * random.uniform() - 0.5, 27 * random.uniform() - 0.5];
      const spots = group(random, 1 + (seed % 2), x, y, 500).filter((spot) => spot.x < 32.4 && spot.y < 26.4);
      if (spots.length === 0) continue;
      pair.show(spots, random, 0.06);
      const [plain, simd] = [fit(pair.plain, spots, 0.15), fit(pair.simd, spots, 0.15)];
      if (!plain || !simd || !pair.plain.sx.subarray(0, spots.length).every((s) => s < 0.5)) continue;
      converged++;
      expectSameFit(pair, spots.length);
    }
    expect(converged).toBeGreaterThan(150);
  });

  test.each([
    [1, 60],
    [60, 1],
    [3, 3],
    [8, 5],
  ])('in images of %d x %d px, whatever can be known there', (width, height) => {
    const pair = both(width, height);
    for (let seed = 0; seed < 40; seed++) {
      const random = createRandom(seed);
      const spots = [{ x: (width - 1) * random.uniform(), y: (height - 1) * random.uniform(), n: 900 }];
      pair.show(spots, random);
      const [plain, simd] = [fit(pair.plain, spots, 0.1), fit(pair.simd, spots, 0.1)];
      if (plain && simd && pair.plain.sx[0] < 0.3 && pair.plain.sy[0] < 0.3) expectSameFit(pair, 1);
      for (const fits of [pair.plain, pair.simd])
        expect(Number.isNaN(fits.x[0] + fits.y[0] + fits.n[0])).toBe(false);
    }
  });

  test.each([0.6, 2.1, 4])('on spots of %d px', (spotSigmaPx) => {
    const pair = both(90, 80, spotSigmaPx);
    for (let seed = 0; seed < 20; seed++) {
      const random = createRandom(seed);
      const far = 3 * spotSigmaPx;
      const spots = [0, 1, 2].map((k) => ({ x: 30 + far * k, y: 40 + 2 * random.uniform(), n: 3000 }));
      pair.show(spots, random);
      expect(fit(pair.simd, spots, 0.1)).toBe(fit(pair.plain, spots, 0.1));
      expectSameFit(pair, 3);
    }
  });

  test('where a fit that can go nowhere starts: on noise alone, and two in one place', () => {
    const pair = both(40, 40);
    for (let seed = 0; seed < 60; seed++) {
      const random = createRandom(seed);
      const spots = Array.from({ length: 1 + (seed % 3) }, () => ({ x: 20, y: 20, n: 50 }));
      pair.show([], random);
      for (const fits of [pair.plain, pair.simd]) {
        fit(fits, spots, 0);
        for (let k = 0; k < spots.length; k++) {
          expect(Math.abs(fits.x[k] - 20)).toBeLessThan(10);
          expect(Math.abs(fits.y[k] - 20)).toBeLessThan(10);
          expect(fits.n[k]).toBeGreaterThanOrEqual(1);
          expect(fits.sx[k] > 0).toBe(true);
        }
      }
    }
  });
});

describe('compiled fits say the same of what they fitted', () => {
  const pair = both(64, 40);
  const each = (count: number, check: (fits: Both) => void) => {
    for (let seed = 0; seed < 60; seed++) {
      const random = createRandom(seed + 1000 * count);
      const spots = group(random, count, 22, 18, 300);
      pair.show([...spots, { x: 27, y: 23, n: 150 }], random, 0.02);
      fit(pair.plain, spots, 0.1);
      fit(pair.simd, spots, 0.1);
      check(pair);
    }
  };
  // Elongation changes with the offset, brightness and place that the fit stopped at.
  const scores = (a: number, b: number) => expect(Math.abs(a - b)).toBeLessThan(0.02 + 0.01 * Math.abs(b));

  test('scores of elongation and the way between the halves', () => {
    each(1, ({ plain, simd }) => {
      plain.elongate();
      simd.elongate();
      scores(simd.elongation[0], plain.elongation[0]);
      expect(Math.abs(simd.splitX[0]) - Math.abs(plain.splitX[0])).toBeLessThan(0.01);
      expect(Math.abs(simd.splitY[0]) - Math.abs(plain.splitY[0])).toBeLessThan(0.01);
    });
  });

  test('significance, and likelihood up to a constant', () => {
    each(1, ({ plain, simd }) => scores(simd.significance(), plain.significance()));
    each(2, ({ plain, simd }) => {
      const change = (fits: SpotFits) => {
        const before = fits.logLikelihood();
        fits.n[0] *= 0.8;
        return fits.logLikelihood() - before;
      };
      scores(change(simd), change(plain));
    });
  });

  test('the strongest peak of the residual', () => {
    each(1, ({ plain, simd }) => {
      for (const fits of [plain, simd]) fits.paint(fits.x[0], fits.y[0], fits.n[0], fits.sigma[0]);
      const [a, b] = [simd.look(), plain.look()];
      scores(a.response, b.response);
      expect([a.xPx, a.yPx]).toEqual([b.xPx, b.yPx]);
      expect(Math.abs(a.brightness / b.brightness - 1)).toBeLessThan(0.02);
    });
  });
});

describe('light of spots', () => {
  // Widths around runs of 64 pixels, by which the plane is cleared.
  test.each([
    [20, 12],
    [63, 20],
    [64, 20],
    [65, 20],
    [150, 33],
  ])('on %d x %d px is painted as the plain fits do, and is gone in the next frame', (width, height) => {
    const pair = both(width, height);
    const random = createRandom(width);
    pair.show([], random);
    const { plain, compiled } = pair.planes;
    const { exports, spotLightAt } = compiled;
    const spotLight = new Float32Array(exports.memory.buffer, spotLightAt, width * height);
    const spots = Array.from({ length: 60 }, () => ({
      // Some reach over the border, or stand beyond it.
      x: (width + 8) * random.uniform() - 4,
      y: (height + 8) * random.uniform() - 4,
      n: 50 + 500 * random.uniform(),
    }));
    for (const fits of [pair.plain, pair.simd]) for (const { x, y, n } of spots) fits.paint(x, y, n, 1.2);
    const worst = spotLight.reduce(
      (most, light, i) => Math.max(most, Math.abs(light - (plain.model[i] - plain.bare[i]))),
      0,
    );
    expect(Math.max(...spotLight)).toBeGreaterThan(20);
    expect(worst).toBeLessThan(1e-3);
    pair.show([], random);
    expect(spotLight.every((light) => light === 0)).toBe(true);
    expect(plain.model).toEqual(plain.bare);
  });
});
