import type { HeliumProperties } from '../helium/helium-at';

/** Cross-section means of thermal counterflow; positive along the normal fluid. */
export interface Counterflow {
  vnMS: number;
  vsMS: number;
  /** v_n - v_s. */
  vnsMS: number;
  /** Relative standard errors of the three. */
  vnRelativeError: number;
  vsRelativeError: number;
  vnsRelativeError: number;
}

/** What is known about the inputs. */
export interface CounterflowErrors {
  /** Relative standard error of the heat flux. */
  heatFlux: number;
  /** Standard error of the bath temperature, K. */
  temperatureK: number;
}

/** A calibrated heater and a regulated bath (common practice, no source). */
export const DEFAULT_COUNTERFLOW_ERRORS: CounterflowErrors = { heatFlux: 0.02, temperatureK: 0.005 };

/**
 * Two-fluid velocities in a channel closed at one end: v_n = q / (rho S T), rho_s v_s + rho_n v_n =
 * 0, hence v_ns = q / (rho_s S T) (Landau's two-fluid model). The error follows
 * (dv/v)^2 = (dq/q)^2 + (dS/S)^2 + (k dT)^2 with k = d ln(S T)/dT = (c/S + 1)/T, and the error of
 * the density ratio where it enters.
 *
 * @param heatFluxWM2 heat flux, W/m^2, >= 0; 0 gives zero velocities.
 */
export function counterflow(
  helium: HeliumProperties,
  heatFluxWM2: number,
  errors: CounterflowErrors = DEFAULT_COUNTERFLOW_ERRORS,
): Counterflow {
  if (!(heatFluxWM2 >= 0)) throw new RangeError(`heatFluxWM2 must be >= 0 W/m^2. Received ${heatFluxWM2}.`);
  const { densityKgM3, entropyJKgK, temperatureK, normalFraction, superfluidFraction } = helium;
  const vnMS = heatFluxWM2 / (densityKgM3 * entropyJKgK * temperatureK);
  const vsMS = -(normalFraction / superfluidFraction) * vnMS;

  const kT = (helium.specificHeatJKgK / entropyJKgK + 1) / temperatureK;
  const base = errors.heatFlux ** 2 + helium.errors.entropy ** 2 + (kT * errors.temperatureK) ** 2;
  // The two fractions add to one, so they share one absolute error.
  const fractionError =
    Math.min(normalFraction, superfluidFraction) *
    Math.max(helium.errors.normalFraction, helium.errors.superfluidFraction);
  const ofSuperfluid = fractionError / superfluidFraction;
  const ofRatio = fractionError / (normalFraction * superfluidFraction);
  return {
    vnMS,
    vsMS: vsMS === 0 ? 0 : vsMS,
    vnsMS: vnMS - vsMS,
    vnRelativeError: Math.sqrt(base),
    vsRelativeError: Math.sqrt(base + ofRatio ** 2),
    vnsRelativeError: Math.sqrt(base + ofSuperfluid ** 2),
  };
}
