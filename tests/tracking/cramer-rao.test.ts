import { expect, test } from 'vitest';
import { positionBound } from '@/tracking/cramer-rao';
import { expectWithin } from '@/tests/helpers/expect-within';

/** Mean over sub-pixel positions, as the published kind of table is made. */
function meanBound(brightness: number, background: number, sigma: number, readNoise = 0): number {
  let sum = 0;
  const places = [-0.4, -0.2, 0, 0.2, 0.4];
  for (const x of places) {
    for (const y of places) sum += positionBound(brightness, background, sigma, readNoise ** 2, x, y).sxPx;
  }
  return sum / places.length ** 2;
}

test.each([
  // Numerical bounds computed independently for 25 x 25 pixels, see the module's reference.
  [1000, 5, 1.5, 0, 0.0607],
  [100, 20, 2, 0, 0.9536],
  [300, 5, 1, 0, 0.0805],
  [5000, 1, 2, 0, 0.0298],
  [300, 5, 1.5, 2, 0.1601],
  [1000, 5, 1.5, 2, 0.0664],
])('%d photons on %d, sigma %f px, read noise %f e-: the bound is %f px', (n, bg, s, r, expected) => {
  expectWithin(meanBound(n, bg, s, r), expected, { rel: 0.01 });
});

test('the bound agrees with the closed form for maximum likelihood', () => {
  // Mortensen et al., Nat. Methods 7, 377 (2010), formula from memory; their integral done numerically.
  const sa2 = 1.5 ** 2 + 1 / 12;
  let integral = 0;
  const steps = 200_000;
  for (let i = 0; i < steps; i++) {
    const t = (i + 0.5) / steps;
    integral += Math.log(t) / (1 + (1000 * t) / (2 * Math.PI * sa2 * 5)) / steps;
  }
  expectWithin(meanBound(1000, 5, 1.5), Math.sqrt(sa2 / 1000 / (1 + integral)), { rel: 0.005 });
});

test('half of a spot outside of the image tells less of its place', () => {
  const whole = positionBound(500, 5, 1.2);
  const cut = positionBound(500, 5, 1.2, 0, 0, 0, { left: 0, right: 12, top: -12, bottom: 12 });
  expect(cut.sxPx).toBeGreaterThan(1.3 * whole.sxPx);
});
