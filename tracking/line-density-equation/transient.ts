/** Steps in which the state is followed; the error of the fourth-order method is then below 1e-6. */
const STEPS = 240;
/** Below this the logarithm of the density is followed no further. */
const LN_LEAST = -60;

/** Line density under steady drive from some start, by numbers that are all > 0. */
export interface Transient {
  /** At time 0, m^-2. */
  startM2: number;
  /** In the steady state, m^-2. */
  steadyM2: number;
  /** C kappa L_inf: relaxation rate scale, 1/s. */
  ratePerS: number;
}

/**
 * ln L at the given times, by Runge-Kutta steps of ln y that shrink where the motion is quick, and cubic
 * Hermite interpolation between them: d ln y / ds = y^(p - 1) - y.
 *
 * @param timeS ascending, >= 0; the result is written to `lnDensity`.
 */
export function followTransient(
  { startM2, steadyM2, ratePerS }: Transient,
  power: number,
  timeS: ArrayLike<number>,
  lnDensity: Float64Array,
): void {
  const lnSteady = Math.log(steadyM2);
  const slope = (u: number) => Math.exp((power - 1) * u) - Math.exp(u);
  const end = ratePerS * timeS[timeS.length - 1];
  let u = Math.log(startM2 / steadyM2);
  let s = 0;
  let next = 0;
  while (next < timeS.length) {
    const rate = slope(u);
    // Steps of a share of the whole, but no more than a tenth of a unit of ln y.
    const step = Math.min(end / STEPS + 1e-300, 0.1 / Math.max(1e-9, Math.abs(rate)));
    const k2 = slope(u + 0.5 * step * rate);
    const k3 = slope(u + 0.5 * step * k2);
    const k4 = slope(u + step * k3);
    const after = Math.max(LN_LEAST, u + (step / 6) * (rate + 2 * k2 + 2 * k3 + k4));
    const rateAfter = slope(after);
    while (next < timeS.length && ratePerS * timeS[next] <= s + step * (1 + 1e-12)) {
      const f = Math.min(1, Math.max(0, (ratePerS * timeS[next] - s) / step));
      const g = 1 - f;
      const hermite =
        (1 + 2 * f) * g * g * u +
        f * g * g * step * rate +
        f * f * (3 - 2 * f) * after -
        f * f * g * step * rateAfter;
      lnDensity[next++] = lnSteady + hermite;
    }
    u = after;
    s += step;
  }
}
