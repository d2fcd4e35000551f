import { describe, expect, test } from 'vitest';
import { createRandom } from '@/tracking/random';
import { advanceFilament, inductionVelocity } from '@/tracking/simulate/local-induction/advance-filament';
import { filamentLength, inductionBeta, type Filament } from '@/tracking/simulate/local-induction/filament';
import { filamentRuler, respacedFilament } from '@/tracking/simulate/local-induction/points-along';
import { wavyLine, wavyStretch } from '@/tracking/simulate/local-induction/wavy-line';
import { KAPPA_M2_S } from '@/tracking/units';
import { expectWithin } from '@/tests/helpers/expect-within';

const RADIUS = 1e-4;
const BETA = inductionBeta(RADIUS);

/** A ring about z, its vorticity by the right hand along +z. */
function ring(points: number, radius = RADIUS): Filament {
  const xyzM = new Float64Array(3 * points);
  for (let i = 0; i < points; i++) {
    const angle = (2 * Math.PI * i) / points;
    xyzM.set([radius * Math.cos(angle), radius * Math.sin(angle), 0], 3 * i);
  }
  return { xyzM, periodM: [0, 0, 0] };
}

/** A right-handed helix about z with so many turns of a length. */
function helix(amplitude: number, turnM: number, turns: number, perTurn: number): Filament {
  const n = turns * perTurn;
  const xyzM = new Float64Array(3 * n);
  for (let i = 0; i < n; i++) {
    const angle = (2 * Math.PI * i) / perTurn;
    xyzM.set([amplitude * Math.cos(angle), amplitude * Math.sin(angle), (turnM * i) / perTurn], 3 * i);
  }
  return { xyzM, periodM: [0, 0, turnM * turns] };
}

const meanOf = (filament: Filament, axis: number) => {
  let sum = 0;
  for (let k = axis; k < filament.xyzM.length; k += 3) sum += filament.xyzM[k];
  return sum / (filament.xyzM.length / 3);
};

const radiusOf = ({ xyzM }: Filament) => Math.hypot(xyzM[0], xyzM[1]);

describe('local induction (Da Rios 1906; Schwarz, Phys. Rev. B 31, 5782 (1985))', () => {
  test('beta is kappa / 4 pi times the logarithm', () => {
    expectWithin(inductionBeta(1e-4, 1e-10), (KAPPA_M2_S / (4 * Math.PI)) * Math.log(1e6), { rel: 1e-12 });
  });

  test('a ring moves along its axis at beta / R and keeps its radius', () => {
    const durationS = 0.05;
    const after = advanceFilament(ring(64), { betaM2S: BETA }, durationS);
    expectWithin(meanOf(after, 2) / durationS, BETA / RADIUS, { rel: 2e-3 });
    expectWithin(radiusOf(after), RADIUS, { rel: 1e-6 });
  });

  test('the velocity of a ring converges as the square of the distance of its points', () => {
    const error = (points: number) =>
      Math.abs(inductionVelocity(ring(points), { betaM2S: BETA })[2] / (BETA / RADIUS) - 1);
    expectWithin(error(32) / error(64), 4, { rel: 0.05 });
  });

  test('mutual friction shrinks a ring: R^2 = R0^2 - 2 alpha beta t', () => {
    const alpha = 0.2;
    const durationS = (0.5 * RADIUS * RADIUS) / (2 * alpha * BETA);
    const after = advanceFilament(ring(64), { betaM2S: BETA, alpha }, durationS);
    expectWithin(radiusOf(after), RADIUS * Math.SQRT1_2, { rel: 2e-3 });
  });

  test('a straight line through a periodic box stands still, whatever the distances of its points', () => {
    const direction = [1, 2, 2].map((c) => c / 3);
    const xyzM = Float64Array.from([0, 1, 2.5, 3, 5, 5.5].flatMap((s) => direction.map((c) => 1e-5 * s * c)));
    const line: Filament = { xyzM, periodM: direction.map((c) => 7e-5 * c) as [number, number, number] };
    const speeds = inductionVelocity(line, { betaM2S: BETA, alpha: 0.3 });
    for (const v of speeds) expectWithin(v, 0, { abs: 1e-9 * (BETA / 1e-5) });
  });

  test.each([0.02, 0.5])(
    'a helix of slope %f turns against its handedness at beta k^2 / sqrt(1 + slope^2), without changing shape',
    (slope) => {
      const turnM = 3e-4;
      const k = (2 * Math.PI) / turnM;
      const amplitude = slope / k;
      const before = helix(amplitude, turnM, 2, 64);
      const durationS = 0.1 / (BETA * k * k);
      const after = advanceFilament(before, { betaM2S: BETA }, durationS);
      // The phase at a fixed height: that of a point less k times how far it was carried up.
      const phase = Math.atan2(after.xyzM[1], after.xyzM[0]) - k * after.xyzM[2];
      expectWithin(phase, (-BETA * k * k * durationS) / Math.sqrt(1 + slope * slope), { rel: 4e-3 });
      expectWithin(radiusOf(after), amplitude, { rel: 1e-4 });
    },
  );

  test('length is kept without friction', () => {
    const line = wavyLine(createRandom(3), [0, 0, 0], [0, 0, 1], 2e-3, { slope: 0.8, waveM: 5e-4 });
    const after = advanceFilament(line, { betaM2S: BETA }, 0.2);
    expectWithin(filamentLength(after), filamentLength(line), { rel: 3e-3 });
    expect(Math.hypot(after.xyzM[0] - line.xyzM[0], after.xyzM[1] - line.xyzM[1])).toBeGreaterThan(2e-5);
  });
});

describe('points along a filament', () => {
  test('a ring laid anew keeps its first point, its length and its radius', () => {
    const points = ring(40);
    const anew = respacedFilament(points, (2 * Math.PI * RADIUS) / 57);
    expect(anew.xyzM.length).toBe(3 * 57);
    expect([...anew.xyzM.subarray(0, 3)]).toEqual([RADIUS, 0, 0]);
    for (let i = 0; i < 57; i++)
      expectWithin(Math.hypot(anew.xyzM[3 * i], anew.xyzM[3 * i + 1]), RADIUS, { rel: 1e-4 });
    expectWithin(filamentLength(anew), 2 * Math.PI * RADIUS, { rel: 1e-3 });
  });

  test('shares of a straight line are shares of its length, over the end of the box', () => {
    const line: Filament = {
      xyzM: Float64Array.from([0, 0, 0, 1, 0, 0, 3, 0, 0, 4, 0, 0]),
      periodM: [8, 0, 0],
    };
    const at = new Float64Array(3);
    const ruler = filamentRuler(line);
    for (const share of [0, 0.1, 0.3, 0.75, 1]) {
      ruler.placeAt(share, at);
      expectWithin(at[0], 8 * share, { abs: 1e-12 });
    }
  });
});

test('wavy lines have the slope and the stretch that were asked for', () => {
  const [slope, lengthM] = [0.8, 6e-3];
  let stretch = 0;
  for (let seed = 0; seed < 60; seed++) {
    const line = wavyLine(createRandom(seed), [0, 0, 0], [0, 0, 1], lengthM, { slope, waveM: 6e-4 });
    stretch += filamentLength(line) / lengthM / 60;
  }
  expectWithin(stretch, wavyStretch(slope), { rel: 5e-3 });
  // Small slopes: 1 + slope^2 / 2.
  expectWithin(wavyStretch(0.1), 1.005, { abs: 3e-5 });
});
