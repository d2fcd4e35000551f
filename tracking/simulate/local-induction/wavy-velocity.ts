import { trimmed } from '../../estimates/line-motion';
import { createRandom, mixSeed } from '../../random';
import { advanceFilament, inductionVelocity } from './advance-filament';
import { inductionBeta } from './filament';
import { respacedFilament } from './points-along';
import { wavyLine, type WavyLineOptions } from './wavy-line';

const LINES = 100;
const WAVES_PER_LINE = 10;
const POINTS_PER_WAVE = 18;

/**
 * c of v = c (kappa / 4 pi) ln(l / a0) / l for lines of random waves that have moved by local induction for a
 * time: velocity in all directions from many such lines, by the trimmed r.m.s. of a component that is measured
 * of real ones. The r.m.s. alone would stay the same in time, since local induction keeps the integral of the
 * squared curvature (Hasimoto, J. Fluid Mech. 51, 477 (1972)); its tails don't.
 */
export function wavyVelocityFactor(
  waves: WavyLineOptions,
  spacingM: number,
  afterS: number,
  seed = 1,
): number {
  const betaM2S = inductionBeta(spacingM);
  const components: number[] = [];
  for (let i = 0; i < LINES; i++) {
    const random = createRandom(mixSeed(seed, i));
    const start = wavyLine(random, [0, 0, 0], [0, 0, 1], WAVES_PER_LINE * waves.waveM, waves);
    const line = advanceFilament(start, { betaM2S }, afterS);
    // Points at equal distances, seen from a direction at random.
    const even = respacedFilament(line, waves.waveM / POINTS_PER_WAVE);
    const v = inductionVelocity(even, { betaM2S });
    const cos = 2 * random.uniform() - 1;
    const turn = 2 * Math.PI * random.uniform();
    const sin = Math.sqrt(1 - cos * cos);
    for (let k = 0; k < v.length; k += 3)
      components.push(v[k] * sin * Math.cos(turn) + v[k + 1] * sin * Math.sin(turn) + v[k + 2] * cos);
  }
  return (Math.sqrt(3 * trimmed(Float64Array.from(components)).variance) * spacingM) / betaM2S;
}
