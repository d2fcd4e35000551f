import { CORE_RADIUS_M, KAPPA_M2_S } from '../units';

/** Of order 1.5 to 2.5 by temperature (Schwarz 1988, value from memory), s.e. 30 %. */
export const LINE_VELOCITY_FACTOR = 2;
export const LINE_VELOCITY_FACTOR_ERROR = 0.3;

/** R.m.s. velocity of lines in three dimensions: c (kappa / 4 pi) ln(l / a0) / l, m/s. */
export function lineVelocity(spacingM: number, factor: number, coreM = CORE_RADIUS_M): number {
  return (factor * (KAPPA_M2_S / (4 * Math.PI)) * Math.log(spacingM / coreM)) / spacingM;
}

/** The spacing whose lines move at a velocity, m; Newton's method on ln l. NaN unless the velocity is > 0. */
export function spacingFromLineVelocity(velocityMS: number, factor: number, coreM = CORE_RADIUS_M): number {
  if (!(velocityMS > 0)) return Number.NaN;
  const scale = (factor * KAPPA_M2_S) / (4 * Math.PI);
  let lnL = Math.log((scale * 13) / velocityMS);
  for (let i = 0; i < 50; i++) {
    const log = lnL - Math.log(coreM);
    // f = ln v(l) - ln v, f' = 1 / ln(l / a0) - 1 in ln l.
    const step = (Math.log(scale * log) - lnL - Math.log(velocityMS)) / (1 / log - 1);
    lnL -= step;
    if (Math.abs(step) < 1e-13) break;
  }
  return Math.exp(lnL);
}
