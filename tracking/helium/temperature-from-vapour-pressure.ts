import type { Refusal } from './helium-at';

/** ITS-90 coefficients for helium-4 vapour pressure, 1.25 to 2.1768 K. */
const A = [1.392408, 0.527153, 0.166756, 0.050988, 0.026514, 0.001975, -0.017976, 0.005409, 0.013259];
const B = 5.6;
const C = 2.9;
/** Vapour pressures at the ends of the scale's range, Pa (1.25 K and the lambda point). */
const RANGE_PA = { low: 114.7, high: 5042 } as const;

/**
 * Bath temperature, K, from the saturated vapour pressure, Pa (International Temperature Scale of
 * 1990, inverse polynomial for helium-4). A refusal outside 1.25 K to the lambda point.
 */
export function temperatureFromVapourPressure(pressurePa: number): { temperatureK: number } | Refusal {
  if (!(pressurePa >= RANGE_PA.low && pressurePa <= RANGE_PA.high)) {
    const given = Number.isFinite(pressurePa) ? `${pressurePa} Pa` : 'This pressure';
    return {
      refused: `${given} is outside the vapour pressures of helium II on the temperature scale (${RANGE_PA.low} to ${RANGE_PA.high} Pa).`,
    };
  }
  const x = (Math.log(pressurePa) - B) / C;
  let temperatureK = 0;
  for (let i = A.length - 1; i >= 0; i--) temperatureK = temperatureK * x + A[i];
  return { temperatureK };
}
