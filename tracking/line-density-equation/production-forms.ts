/**
 * Published forms of the production term of the line-density equation dL/dt = P - C kappa L^2 under a steady
 * counterflow velocity V, named by how P depends on V. In units of the steady state, y = L / L_inf and
 * s = C kappa L_inf t, each reads dy/ds = y^p - y^2: all have the same steady state L = gamma^2 V^2, and
 * only a transient tells them apart.
 */
export const PRODUCTION_FORMS = [
  /** Vinen, Proc. R. Soc. A 242, 493 (1957): the power is 3/2. */
  { name: 'V L^3/2', power: 1.5 },
  /** Competing form of the same paper and later work: V^2 L / kappa. */
  { name: 'V^2 L', power: 1 },
  /** Phys. Rev. B 91, 180504(R) (2015): V^3 L^1/2 / kappa^2. */
  { name: 'V^3 L^1/2', power: 0.5 },
] as const;

export type ProductionForm = (typeof PRODUCTION_FORMS)[number];
