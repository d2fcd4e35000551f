import { KAPPA_M2_S } from '../units';

/**
 * Free decay of a random tangle: 1/L = 1/L0 + chi2 kappa t / (2 pi) (Vinen 1957).
 * @returns line density, m^-2.
 */
export function decayOfRandomTangle(startM2: number, chi2: number, timeS: number): number {
  return 1 / (1 / startM2 + (chi2 * KAPPA_M2_S * timeS) / (2 * Math.PI));
}

/**
 * Late decay with the largest eddies as wide as the channel: kappa L = (3 C)^(3/2) d / (2 pi
 * sqrt(nu')) t^(-3/2) (Skrbek & Stalp, Phys. Fluids 12, 1997 (2000)).
 * @param nuPrimeM2S effective kinematic viscosity, m^2/s.
 * @returns line density, m^-2.
 */
export function lateDecay(
  channelWidthM: number,
  nuPrimeM2S: number,
  timeS: number,
  kolmogorovC = 1.5,
): number {
  return (
    ((3 * kolmogorovC) ** 1.5 * channelWidthM) /
    (2 * Math.PI * Math.sqrt(nuPrimeM2S) * timeS ** 1.5 * KAPPA_M2_S)
  );
}
