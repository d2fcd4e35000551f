import { expectedFlow } from '../flow/expected-flow';
import { GAMMA_RELATIVE_ERROR, gammaAt, steadyLineDensity } from '../flow/steady-tangle';
import type { Conditions } from '../types';
import { notUsable, type DensityResult } from './interval';

/** What the heat flux lets expect: L = gamma^2 v_ns^2 with a published gamma of 30 % error. */
export function heatFluxPrior(
  conditions: Pick<Conditions, 'temperature_K' | 'heatFlux_W_m2'>,
): DensityResult {
  const method = 'heat-flux-prior';
  const expected = expectedFlow(conditions);
  if ('refused' in expected) return notUsable(method, expected.refused);
  const { flow, temperatureK, heatFluxWM2 } = expected;
  const gamma = gammaAt(temperatureK);
  const inputs = {
    temperature: { value: temperatureK, unit: 'K' },
    heatFlux: { value: heatFluxWM2, unit: 'W/m^2' },
    counterflowVelocity: { value: flow.vnsMS, unit: 'm/s' },
    gamma: { value: Number.isNaN(gamma) ? null : gamma, unit: 's/m^2' },
  };
  if (Number.isNaN(gamma)) {
    return notUsable(method, 'No gamma is on file at this temperature (1.30 to 1.90 K).', inputs);
  }
  if (flow.vnsMS === 0) return notUsable(method, 'Without heat flux no steady tangle is expected.', inputs);
  return {
    method,
    valueM2: steadyLineDensity(gamma, flow.vnsMS),
    statistical: 2 * flow.vnsRelativeError,
    systematic: 2 * GAMMA_RELATIVE_ERROR,
    inputs,
    note: 'Expected from the heat flux with a published gamma, unverified and of 30 % error; shown for comparison, not combined.',
  };
}
