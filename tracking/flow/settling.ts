import type { HeliumProperties } from '../helium/helium-at';
import { GRAVITY_M_S2 } from '../units';

export interface Settling {
  /** Terminal velocity along gravity, m/s: positive sinks, negative rises. */
  velocityMS: number;
  /** Reynolds number; Stokes' law holds below 1. */
  reynolds: number;
}

/**
 * Terminal velocity of a sphere in helium II: drag of the normal fluid only (its viscosity),
 * buoyancy of the whole fluid: v = (rho_p - rho) g d^2 / (18 eta) (Stokes).
 */
export function settling(helium: HeliumProperties, diameterM: number, densityKgM3: number): Settling {
  const velocityMS =
    ((densityKgM3 - helium.densityKgM3) * GRAVITY_M_S2 * diameterM ** 2) / (18 * helium.viscosityPaS);
  const reynolds = (Math.abs(velocityMS) * diameterM * helium.densityKgM3) / helium.viscosityPaS;
  return { velocityMS, reynolds };
}

/** Radius, m, of a sphere that settles at a measured velocity: the inverse of `settling`. NaN when the signs disagree. */
export function radiusFromSettling(
  helium: HeliumProperties,
  velocityMS: number,
  densityKgM3: number,
): number {
  const excess = densityKgM3 - helium.densityKgM3;
  return Math.sqrt((9 * helium.viscosityPaS * velocityMS) / (2 * GRAVITY_M_S2 * excess));
}
