import { createRandom, mixSeed } from '../../random';
import { inductionVelocity } from './advance-filament';
import { chords, inductionBeta } from './filament';
import { wavyLine, type WavyLineOptions } from './wavy-line';

const LINES = 200;
const WAVES_PER_LINE = 8;

/**
 * c of v = c (kappa / 4 pi) ln(l / a0) / l for lines of random waves that move by local induction: their
 * r.m.s. velocity in all directions, by length, from many such lines. It stays the same in time, since
 * local induction keeps the integral of the squared curvature (Hasimoto, J. Fluid Mech. 51, 477 (1972)).
 */
export function wavyVelocityFactor(waves: WavyLineOptions, spacingM: number, seed = 1): number {
  const betaM2S = inductionBeta(spacingM);
  let [square, length] = [0, 0];
  for (let i = 0; i < LINES; i++) {
    const random = createRandom(mixSeed(seed, i));
    const line = wavyLine(random, [0, 0, 0], [0, 0, 1], WAVES_PER_LINE * waves.waveM, waves);
    const v = inductionVelocity(line, { betaM2S });
    const { lengthM } = chords(line);
    for (let k = 0; k < lengthM.length; k++) {
      const weight = (lengthM[k] + lengthM[(k + lengthM.length - 1) % lengthM.length]) / 2;
      square += weight * (v[3 * k] ** 2 + v[3 * k + 1] ** 2 + v[3 * k + 2] ** 2);
      length += weight;
    }
  }
  return (Math.sqrt(square / length) * spacingM) / betaM2S;
}
