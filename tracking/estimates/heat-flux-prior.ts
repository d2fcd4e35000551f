import { expectedFlow } from '../flow/expected-flow';
import {
  GAMMA_RELATIVE_ERROR,
  gammaAt,
  OWN_GAMMA_RELATIVE_ERROR,
  steadyLineDensity,
} from '../flow/steady-tangle';
import type { Conditions } from '../types';
import { notUsable, type DensityResult } from './interval';

/** What the heat flux lets expect: L = gamma^2 (v_ns - v_0)^2 with the run's own gamma, or a published one of 30 % error. */
export function heatFluxPrior(
  conditions: Pick<Conditions, 'temperature_K' | 'heatFlux_W_m2' | 'gamma_s_m2' | 'v0_m_s'>,
): DensityResult {
  const method = 'heat-flux-prior';
  const expected = expectedFlow(conditions);
  if ('refused' in expected) return notUsable(method, expected.refused);
  const { flow, temperatureK, heatFluxWM2 } = expected;
  const own = conditions.gamma_s_m2 ?? null;
  const gamma = own ?? gammaAt(temperatureK);
  const v0MS = conditions.v0_m_s ?? 0;
  const inputs = {
    temperature: { value: temperatureK, unit: 'K' },
    heatFlux: { value: heatFluxWM2, unit: 'W/m^2' },
    counterflowVelocity: { value: flow.vnsMS, unit: 'm/s' },
    gamma: { value: Number.isNaN(gamma) ? null : gamma, unit: 's/m^2' },
    criticalVelocity: { value: v0MS, unit: 'm/s' },
  };
  if (Number.isNaN(gamma)) {
    return notUsable(method, 'No gamma is on file at this temperature (1.30 to 1.90 K).', inputs);
  }
  if (flow.vnsMS === 0) return notUsable(method, 'Without heat flux no steady tangle is expected.', inputs);
  const valueM2 = steadyLineDensity(gamma, flow.vnsMS, v0MS);
  if (!(valueM2 > 0)) {
    const note = 'The counterflow velocity is below the critical one: no steady tangle is expected.';
    return notUsable(method, note, inputs);
  }
  return {
    method,
    valueM2,
    statistical: 2 * flow.vnsRelativeError,
    systematic: 2 * (own === null ? GAMMA_RELATIVE_ERROR : OWN_GAMMA_RELATIVE_ERROR),
    inputs,
    note:
      own !== null
        ? 'Expected from the heat flux with the run’s own gamma; shown for comparison, not combined.'
        : 'Expected from the heat flux with a published gamma, unverified and of 30 % error; shown for comparison, not combined.',
  };
}
