import { trimmed } from '../../estimates/line-motion';
import { createRandom, mixSeed } from '../../random';
import { advanceFilament, inductionVelocity } from './advance-filament';
import { inductionBeta } from './filament';
import { respacedFilament } from './points-along';
import { wavyLine, type WavyLineOptions } from './wavy-line';

const LINES = 100;
const WAVES_PER_LINE = 10;
const POINTS_PER_WAVE = 18;
/** Times at which lines are looked at. */
const LOOKS = 7;

/**
 * c of v = c (kappa / 4 pi) ln(l / a0) / l for lines of random waves while they move by local induction: velocity in
 * all directions from many such lines at all times between two, by the trimmed r.m.s. of a component that is measured
 * of real ones. The r.m.s. alone would stay the same in time, since local induction keeps the integral of the squared
 * curvature (Hasimoto, J. Fluid Mech. 51, 477 (1972)); its tails don't.
 *
 * @param betweenS from when on the lines are looked at, and until when, counted from when they were made at random
 */
export function wavyVelocityFactor(
  waves: WavyLineOptions,
  spacingM: number,
  [fromS, toS]: readonly [number, number],
  seed = 1,
): number {
  const betaM2S = inductionBeta(spacingM);
  const components: number[] = [];
  for (let i = 0; i < LINES; i++) {
    const random = createRandom(mixSeed(seed, i));
    const start = wavyLine(random, [0, 0, 0], [0, 0, 1], WAVES_PER_LINE * waves.waveM, waves);
    let line = advanceFilament(start, { betaM2S }, fromS);
    for (let look = 0; look < LOOKS; look++) {
      if (look > 0) line = advanceFilament(line, { betaM2S }, (toS - fromS) / (LOOKS - 1));
      // Points at equal distances, each seen from a direction at random.
      const even = respacedFilament(line, waves.waveM / POINTS_PER_WAVE);
      const v = inductionVelocity(even, { betaM2S });
      for (let k = 0; k < v.length; k += 3) {
        // A direction for every point: one for a whole line would leave the result to a hundred of them.
        const cos = 2 * random.uniform() - 1;
        const turn = 2 * Math.PI * random.uniform();
        const sin = Math.sqrt(1 - cos * cos);
        components.push(v[k] * sin * Math.cos(turn) + v[k + 1] * sin * Math.sin(turn) + v[k + 2] * cos);
      }
    }
  }
  return (Math.sqrt(3 * trimmed(Float64Array.from(components)).variance) * spacingM) / betaM2S;
}
