/** Physical constants, SI. Lengths in pixels cross to metres by `pxToM` only. */

/** Planck constant, J s, exact (SI 2019). */
export const PLANCK_J_S = 6.62607015e-34;

/** Mass of a helium-4 atom, kg: CODATA 2022 alpha-particle mass + 2 electrons - binding energy. */
export const HELIUM4_MASS_KG = 6.646479081e-27;

/** Quantum of circulation of helium-4, h / m4 = 9.96929e-8 m^2/s. */
export const KAPPA_M2_S = PLANCK_J_S / HELIUM4_MASS_KG;

/**
 * Vortex core radius, m. Order 1e-10 (Stasiak et al., arXiv:2411.08942); it enters only through
 * logarithms, where a factor 2 is 5 %.
 */
export const CORE_RADIUS_M = 1e-10;

/** Standard acceleration of gravity, m/s^2 (convention). */
export const GRAVITY_M_S2 = 9.80665;

/** Lambda point at saturated vapour pressure, K, ITS-90 (Donnelly & Barenghi 1998). */
export const LAMBDA_POINT_K = 2.1768;

/** Pixels to metres. */
export function pxToM(valuePx: number, pixelSizeM: number): number {
  return valuePx * pixelSizeM;
}
