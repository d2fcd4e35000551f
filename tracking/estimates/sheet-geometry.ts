/** Steps of the quadratures below; the integrands are smooth. */
const STEPS = 400;

/**
 * Length of a straight isotropic line around one of its tracers, both inside a sheet, whose
 * projection lies within a distance of it, averaged over where the tracer sits: times tracers per
 * length it is the expected number of fellows of a tracer. With c = cos of the angle to the
 * normal of the sheet, uniform in 0..1 for lines picked by a tracer, s = sqrt(1 - c^2): 2 times the
 * integral over c of the integral over t from 0 to R/s of max(0, 1 - t c / h).
 *
 * @returns m, for projected distances from `lowM` to `highM` in a sheet `thicknessM` thick.
 */
export function fellowLength(lowM: number, highM: number, thicknessM: number): number {
  return within(highM, thicknessM) - within(lowM, thicknessM);
}

function within(reachM: number, thicknessM: number): number {
  if (!(reachM > 0)) return 0;
  let sum = 0;
  for (let i = 0; i < STEPS; i++) {
    // c = sin(a) makes the integrand smooth where the line lies in the sheet.
    const a = ((i + 0.5) / STEPS) * (Math.PI / 2);
    const c = Math.sin(a);
    const s = Math.cos(a);
    const t = Math.min(reachM / s, thicknessM / c);
    sum += (t - (t * t * c) / (2 * thicknessM)) * s;
  }
  return (2 * sum * (Math.PI / 2)) / STEPS;
}

/**
 * Share of the lines that cross a sheet which carry at least one tracer: the integral of
 * 2 c (1 - exp(-lambda h / c)), lines crossing in proportion to c and running h / c inside.
 *
 * @param tracersPerThickness tracers per line length times thickness.
 */
export function decoratedShare(tracersPerThickness: number): number {
  let sum = 0;
  for (let i = 0; i < STEPS; i++) {
    const c = (i + 0.5) / STEPS;
    sum += 2 * c * -Math.expm1(-tracersPerThickness / c);
  }
  return sum / STEPS;
}

/** d ln `decoratedShare` / d ln of its argument. */
export function decoratedSharePower(tracersPerThickness: number): number {
  let sum = 0;
  for (let i = 0; i < STEPS; i++) sum += 2 * Math.exp((-tracersPerThickness * STEPS) / (i + 0.5));
  return (tracersPerThickness * sum) / STEPS / decoratedShare(tracersPerThickness);
}
