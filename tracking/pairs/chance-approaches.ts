import { CORE_RADIUS_M, KAPPA_M2_S } from '../units';

/**
 * Meetings within a distance expected of independent tracks: n^2 A T delta sqrt(pi) sigma_v. In
 * the frame of one track the others stream past at a mean speed of sqrt(pi) sigma_v.
 *
 * @param perAreaM2 tracks per area, m^-2.
 * @param sigmaVMS r.m.s. velocity per component, m/s.
 */
export function chanceApproaches(
  perAreaM2: number,
  areaM2: number,
  durationS: number,
  reachM: number,
  sigmaVMS: number,
): number {
  return perAreaM2 ** 2 * areaM2 * durationS * reachM * Math.sqrt(Math.PI) * sigmaVMS;
}

/** Share of pairs at uniform depths in a sheet that are within a depth distance: 2 d/h - (d/h)^2, at most 1. */
export function depthFactor(distanceM: number, sheetM: number): number {
  const part = Math.min(1, distanceM / sheetM);
  return 2 * part - part * part;
}

/** Poisson tail: chance of observing at least `observed` when `expected` are expected. */
export function poissonTail(expected: number, observed: number): number {
  let term = Math.exp(-expected);
  let below = 0;
  for (let k = 0; k < observed; k++) {
    below += term;
    term *= expected / (k + 1);
  }
  return Math.max(0, 1 - below);
}

/**
 * Reconnections of a tangle per volume and time, m^-3 s^-1: (kappa / 6 pi) L^(5/2) ln(L^(-1/2) / a0)
 * (Barenghi & Samuels 2004).
 */
export function reconnectionRate(lineDensityM2: number, coreM = CORE_RADIUS_M): number {
  return (
    (KAPPA_M2_S / (6 * Math.PI)) * lineDensityM2 ** 2.5 * Math.log(1 / (Math.sqrt(lineDensityM2) * coreM))
  );
}
