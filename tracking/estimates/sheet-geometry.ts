/** Steps of the quadratures below; the integrands are smooth. */
const STEPS = 400;

/**
 * Length of a straight isotropic line around one of its tracers, both inside a sheet, whose
 * projection lies within a distance of it, averaged over where the tracer sits: times tracers per
 * length it is the expected number of fellows of a tracer. With c = cos of the angle to the
 * normal of the sheet, uniform in 0..1 for lines picked by a tracer, s = sqrt(1 - c^2): 2 times the
 * integral over c of the integral over t of max(0, 1 - t c / h), the projected distance t s from `lowM` to `highM`.
 *
 * @param fadeM fellows at a projected distance d count exp(-d / fadeM); without it all count alike.
 * @returns m, for projected distances from `lowM` to `highM` in a sheet `thicknessM` thick.
 */
export function fellowLength(lowM: number, highM: number, thicknessM: number, fadeM = Infinity): number {
  let sum = 0;
  for (let i = 0; i < STEPS; i++) {
    // c = sin(a) makes the integrand smooth where the line lies in the sheet.
    const a = ((i + 0.5) / STEPS) * (Math.PI / 2);
    const c = Math.sin(a);
    const s = Math.cos(a);
    const from = lowM / s;
    const to = Math.min(highM / s, thicknessM / c);
    if (to > from) sum += s * fading(from, to, c / thicknessM, s / fadeM);
  }
  return (2 * sum * (Math.PI / 2)) / STEPS;
}

/** Below this the exact integral would be a small difference of large numbers. */
const FADE_LEAST = 1e-4;

/** Integral of (1 - loss t) exp(-fade t). */
function fading(from: number, to: number, loss: number, fade: number): number {
  if (fade * to < FADE_LEAST) {
    const middle = (from + to) / 2;
    const length = to - from;
    return Math.exp(-fade * middle) * (length * (1 - loss * middle) + (loss * fade * length ** 3) / 12);
  }
  const ending = (t: number) => (Math.exp(-fade * t) * (loss / fade - (1 - loss * t))) / fade;
  return ending(to) - ending(from);
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
