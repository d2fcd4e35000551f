import { describe, expect, test } from 'vitest';
import { lnNormalTail, normalHazard } from '@/tracking/normal-tail';
import { createRandom } from '@/tracking/random';
import { studyTailExponents } from '@/tracking/studies/tail-exponents';
import { compareDensities } from '@/tracking/tails/likelihood-ratio';
import { fitPowerLawTail } from '@/tracking/tails/power-law-tail';
import { fitGaussianTail, fitLogNormalTail, powerLawDensity } from '@/tracking/tails/tail-alternatives';
import { tailError } from '@/tracking/tails/tail-error';
import { velocityTails } from '@/tracking/tails/velocity-tails';
import { expectWithin } from '@/tests/helpers/expect-within';
import { madeTracks } from '../dispersion/made-tracks';

const descending = (values: Float64Array) => values.sort().reverse();
const pareto = (seed: number, n: number, alpha: number, from: number) => {
  const random = createRandom(seed);
  return descending(
    Float64Array.from({ length: n }, () => from * (1 - random.uniform()) ** (-1 / (alpha - 1))),
  );
};
const alone = (n: number) => Uint32Array.from({ length: n }, (_, k) => k);

describe('tail of the normal distribution', () => {
  test('equals the tables', () => {
    // Abramowitz & Stegun, table 26.1 and 26.2: Q(1) = .15865525, Q(3) = 1.349898e-3, -log10 Q(10) = 23.11805.
    expectWithin(Math.exp(lnNormalTail(1)), 0.1586552539, { rel: 1e-9 });
    expectWithin(Math.exp(lnNormalTail(3)), 1.349898032e-3, { rel: 1e-8 });
    expectWithin(-lnNormalTail(10) / Math.LN10, 23.11805, { abs: 1e-5 });
    expectWithin(Math.exp(lnNormalTail(-1)), 0.8413447461, { rel: 1e-9 });
    // Mills: the hazard tends to z + 1 / z.
    expectWithin(normalHazard(30), 30 + 1 / 30, { rel: 1e-4 });
    expectWithin(normalHazard(0), Math.sqrt(2 / Math.PI), { rel: 1e-12 });
  });
});

describe('power-law tail', () => {
  test.each([2.5, 3, 4])('the exponent %d of a pure power law is found within its error', (alpha) => {
    const size = pareto(3, 4000, alpha, 1e-3);
    const tail = fitPowerLawTail(size, 0);
    if (!tail) throw new Error('No tail was found.');
    const { standardError, fits } = tailError(size, alone(4000), tail);
    // Clauset et al. 2009: standard error (alpha - 1) / sqrt n.
    expectWithin(standardError, (tail.alpha - 1) / Math.sqrt(tail.samples), { rel: 0.1 });
    expectWithin(tail.alpha, alpha, { abs: 4 * standardError });
    expect(fits).toBe(true);
  });

  test('begins where the body ends', () => {
    const random = createRandom(4);
    // A third of the samples follow v^-3 from 2 mm/s on; the rest lie evenly below.
    const size = descending(
      Float64Array.from({ length: 9000 }, (_, k) =>
        k % 3 === 0 ? 2e-3 / Math.sqrt(1 - random.uniform()) : 2e-3 * random.uniform(),
      ),
    );
    const tail = fitPowerLawTail(size, 0);
    expectWithin(tail?.fromMS ?? 0, 2e-3, { rel: 0.35 });
    expectWithin(tail?.alpha ?? 0, 3, { abs: 0.2 });
  });

  test('never begins below the noise, and needs a hundred samples', () => {
    const size = pareto(5, 3000, 3, 1e-3);
    expect(fitPowerLawTail(size, 3e-3)?.fromMS).toBeGreaterThanOrEqual(3e-3);
    expect(fitPowerLawTail(size, 0.5)).toBeNull();
    expect(fitPowerLawTail(pareto(5, 150, 3, 1e-3), 0)).toBeNull();
  });

  test('samples of one track that say the same widen the interval', () => {
    const single = pareto(6, 500, 3, 1e-3);
    const fourfold = descending(Float64Array.from({ length: 2000 }, (_, k) => single[k >> 2]));
    const tail = { fromMS: 1e-3, samples: 2000, distance: 0 };
    const dependent = tailError(
      fourfold,
      Uint32Array.from({ length: 2000 }, (_, k) => k >> 2),
      tail,
    );
    const independent = tailError(fourfold, alone(2000), tail);
    expectWithin(dependent.standardError / independent.standardError, 2, { rel: 0.05 });
  });

  test('a true power law is turned down about once in twenty times', () => {
    let refused = 0;
    for (let seed = 0; seed < 400; seed++) {
      const size = pareto(100 + seed, 300, 3, 1);
      let ln = 0;
      for (const v of size) ln += Math.log(v);
      const alpha = 1 + 300 / ln;
      let distance = 0;
      size.forEach((v, k) => {
        const above = v ** (1 - alpha);
        distance = Math.max(distance, Math.abs(above - k / 300), Math.abs(above - (k + 1) / 300));
      });
      if (!tailError(size, alone(300), { fromMS: 1, samples: 300, distance }).fits) refused++;
    }
    // Binomial with p = 0.05: 20 +- 4.4, bounds at more than 3 standard deviations.
    expect(refused).toBeGreaterThan(5);
    expect(refused).toBeLessThan(36);
  });
});

describe('alternatives', () => {
  const from = 1;
  const random = createRandom(7);
  const gaussian = descending(
    Float64Array.from({ length: 20000 }, () => Math.abs(random.normal())).filter((v) => v > from),
  );
  const logNormal = descending(
    Float64Array.from({ length: 40000 }, () => Math.exp(0.6 * random.normal())).filter((v) => v > from),
  );

  test.each([
    ['Gaussian', fitGaussianTail(gaussian, gaussian.length, from)],
    ['log-normal', fitLogNormalTail(logNormal, logNormal.length, from)],
    ['power law', powerLawDensity(3, from)],
  ])('the %s tail is a density: its integral above the beginning is 1', (_, density) => {
    // v = from / w maps the tail to (0, 1]; midpoint rule.
    let sum = 0;
    const cells = 20000;
    for (let k = 0; k < cells; k++) {
      const w = (k + 0.5) / cells;
      sum += Math.exp(density(from / w)) * (from / (w * w)) * (1 / cells);
    }
    expectWithin(sum, 1, { abs: 2e-3 });
  });

  test('are told from a power law, each way', () => {
    const law = (size: Float64Array) => {
      let ln = 0;
      for (const v of size) ln += Math.log(v / from);
      return powerLawDensity(1 + size.length / ln, from);
    };
    const against = (size: Float64Array, fit: typeof fitGaussianTail) =>
      compareDensities(size, alone(size.length), size.length, law(size), fit(size, size.length, from));
    const truth = pareto(8, 3000, 3, from);
    expect(against(gaussian, fitGaussianTail).lnRatio).toBeLessThan(0);
    expect(against(gaussian, fitGaussianTail).pEqual).toBeLessThan(1e-3);
    expect(against(logNormal, fitLogNormalTail).pEqual).toBeLessThan(1e-3);
    expect(against(truth, fitGaussianTail).lnRatio).toBeGreaterThan(0);
    expect(against(truth, fitGaussianTail).pEqual).toBeLessThan(1e-3);
    // A log-normal can imitate a power law, so no preference is expected for it.
    expect(against(truth, fitLogNormalTail).pEqual).toBeGreaterThan(0.05);
  });
});

describe('tails of velocities', () => {
  const conditions = { pixelSize_m: 1e-5, frameInterval_s: 0.005, flowDirection: null };
  const steps = (seed: number, draw: (random: ReturnType<typeof createRandom>) => number) => {
    const random = createRandom(seed);
    return madeTracks(random, 400, 40, 0.01, () => {
      const xPx = new Float64Array(40);
      const yPx = new Float64Array(40);
      for (let k = 1; k < 40; k++) {
        const size = draw(random);
        const angle = 2 * Math.PI * random.uniform();
        xPx[k] = xPx[k - 1] + size * Math.cos(angle);
        yPx[k] = yPx[k - 1] + size * Math.sin(angle);
      }
      return { xPx, yPx };
    });
  };

  test('steps that fall as v^-3 give an exponent of 3 within 0.2', () => {
    const tracks = steps(21, (random) => 0.5 / Math.sqrt(1 - random.uniform()));
    const tails = velocityTails(tracks, new Uint8Array(400), conditions, { lagsFrames: [1], seed: 1 });
    const speed = tails.find(
      ({ component, population }) => component === 'speed' && population === 'trapped',
    );
    expect(speed?.tailSamples).toBeGreaterThan(2000);
    expectWithin(speed?.exponent ?? 0, 3, { abs: 0.2 });
    expect(speed?.verdict).toBe('power law');
  });

  test.each([1, 2])(
    'above a Gaussian body and noise of a seventh of where the tail begins it is 3 within 0.2 (seed %d)',
    (seed) => {
      const figures = studyTailExponents({ exponent: 3, fromPx: 0.5, tailShare: 0.4, fromOverNoise: 7 }, [
        seed,
      ]);
      expect(figures.tailSamples).toBeGreaterThanOrEqual(2000);
      expect(figures.worstOff).toBeLessThan(0.2);
      expect(figures.namedPowerLaw).toBe(1);
    },
  );

  test.each([22, 24, 25])('Gaussian steps are never called a power law (seed %d)', (seed) => {
    const random = createRandom(seed);
    const path = () => {
      let at = 0;
      return Array.from({ length: 40 }, () => (at += random.normal()));
    };
    const gaussian = madeTracks(random, 300, 40, 0.01, () => ({ xPx: path(), yPx: path() }));
    const tails = velocityTails(gaussian, new Uint8Array(300).fill(1), conditions, {
      lagsFrames: [1, 3],
      seed: 1,
    });
    expect(tails.length).toBe(12);
    for (const { verdict } of tails) expect(['Gaussian', 'the data cannot tell']).toContain(verdict);
  });

  test('a few tracks are too few', () => {
    const few = steps(23, () => 1);
    few.count = 3;
    const [tail] = velocityTails(few, new Uint8Array(3), conditions, { lagsFrames: [1], seed: 1 });
    expect(tail).toMatchObject({ verdict: 'too few samples', exponent: null });
  });
});
