import { describe, expect, test } from 'vitest';
import { heliumAt, isRefusal, type HeliumProperties } from '@/tracking/helium/helium-at';
import { HE2_TABLE } from '@/tracking/helium/he2-table';
import { temperatureFromVapourPressure } from '@/tracking/helium/temperature-from-vapour-pressure';
import { expectWithin } from '@/tests/helpers/expect-within';

function at(temperatureK: number): HeliumProperties {
  const helium = heliumAt(temperatureK);
  if (isRefusal(helium)) throw new Error(helium.refused);
  return helium;
}

describe('helium II properties', () => {
  // Expected values: Donnelly & Barenghi, J. Phys. Chem. Ref. Data 27, 1217 (1998).
  test('agree with the published tables', () => {
    expectWithin(at(1.65).densityKgM3, 145.235, { abs: 0.01 });
    expectWithin(at(1.9).superfluidFraction, 0.58046, { abs: 0.001 });
    expectWithin(at(2.0).entropyJKgK, 962, { abs: 10 });
    expectWithin(at(1.8).viscosityPaS, 1.298e-6, { abs: 0.01e-6 });
  });

  test('alpha is rho_n B / (2 rho)', () => {
    // B = 1.1445, rho_n = 28.086, rho = 145.235 at 1.65 K, same source.
    expectWithin(at(1.65).alpha, (28.086 * 1.1445) / (2 * 145.235), { abs: 2e-4 });
    // Barenghi, Donnelly & Vinen (1983) as used in filament simulations: 0.072 at 1.5 K.
    expectWithin(at(1.5).alpha, 0.072, { abs: 5e-4 });
  });

  test('second sound follows from entropy, specific heat and densities', () => {
    // u2^2 = S^2 T rho_s / (c rho_n), Landau; 20.31 m/s at 1.70 K.
    const he = at(1.7);
    const u2 = Math.sqrt(
      (he.entropyJKgK ** 2 * he.temperatureK * he.superfluidDensityKgM3) /
        (he.specificHeatJKgK * he.normalDensityKgM3),
    );
    expectWithin(u2, 20.31, { abs: 0.05 });
    expectWithin(he.secondSoundMS, 20.33, { abs: 0.01 });
  });

  test('interpolation is monotone between knots where the table is', () => {
    let before = at(1.3);
    for (let k = 1; k <= 850; k++) {
      const now = at(Math.min(2.15, 1.3 + k * 0.001));
      expect(now.entropyJKgK).toBeGreaterThan(before.entropyJKgK);
      expect(now.normalFraction).toBeGreaterThan(before.normalFraction);
      expect(now.normalDensityKgM3 + now.superfluidDensityKgM3).toBeCloseTo(now.densityKgM3, 9);
      before = now;
    }
  });

  test('knots are reproduced', () => {
    HE2_TABLE.temperatureK.forEach((t, i) => {
      expectWithin(at(t).entropyJKgK, HE2_TABLE.entropyJKgK[i], { rel: 1e-12 });
      expectWithin(at(t).alphaPrime, HE2_TABLE.alphaPrime[i], { abs: 1e-12 });
    });
  });

  test('temperatures off the table are refused with a sentence, never extrapolated', () => {
    for (const t of [1.2, 2.16, 2.3, 4.2, 0, -1, Number.NaN, Number.POSITIVE_INFINITY]) {
      expect(isRefusal(heliumAt(t)), String(t)).toBe(true);
    }
    expect(heliumAt(2.3)).toEqual({
      refused: '2.30 K is above the lambda point: there is no superfluid. Enter 1.30 to 2.15 K.',
    });
    expect(at(1.3).warning).toBeNull();
    expect(at(2.12).warning).toContain('2.10 K');
  });
});

test('bath temperature from vapour pressure follows ITS-90', () => {
  const at2K = temperatureFromVapourPressure(3129.97);
  expect(isRefusal(at2K)).toBe(false);
  if (!isRefusal(at2K)) expectWithin(at2K.temperatureK, 2.0, { abs: 0.0005 });
  // The vapour-pressure spline of the 1998 tables is an independent route: 0.5 mK apart at most.
  for (let i = 0; i < HE2_TABLE.temperatureK.length; i++) {
    const t = temperatureFromVapourPressure(HE2_TABLE.vapourPressurePa[i]);
    if (isRefusal(t)) throw new Error(t.refused);
    expectWithin(t.temperatureK, HE2_TABLE.temperatureK[i], { abs: 0.0005 });
  }
  expect(isRefusal(temperatureFromVapourPressure(101325))).toBe(true);
});
