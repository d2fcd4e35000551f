/**
 * gamma(T) of the steady tangle L^1/2 = gamma (v_ns - v_0), s/m^2, from simulations quoted with
 * Adachi, Fujiyama & Tsubota, Phys. Rev. B 81, 104511 (2010). Values from memory: unverified,
 * published values scatter by 20 to 40 % between channels. Never a pass or fail limit.
 */
export const GAMMA_TABLE = { temperatureK: [1.3, 1.6, 1.9], gammaSM2: [53.5e4, 109.6e4, 140.1e4] } as const;

/** Relative standard error of gamma (30 %), so that ln L has 0.6. */
export const GAMMA_RELATIVE_ERROR = 0.3;

/** The same of a gamma that a laboratory states for its own channel (common practice, no source). */
export const OWN_GAMMA_RELATIVE_ERROR = 0.1;

/** gamma at a temperature, s/m^2, linear between the table's points; NaN outside 1.3 to 1.9 K. */
export function gammaAt(temperatureK: number): number {
  const { temperatureK: t, gammaSM2: g } = GAMMA_TABLE;
  if (!(temperatureK >= t[0] && temperatureK <= t[2])) return Number.NaN;
  const i = temperatureK > t[1] ? 1 : 0;
  return g[i] + ((g[i + 1] - g[i]) * (temperatureK - t[i])) / (t[i + 1] - t[i]);
}

/** Vortex line density of the steady tangle, m^-2: gamma^2 (v_ns - v_0)^2; 0 below v_0. */
export function steadyLineDensity(gammaSM2: number, vnsMS: number, v0MS = 0): number {
  return (gammaSM2 * Math.max(0, Math.abs(vnsMS) - v0MS)) ** 2;
}
