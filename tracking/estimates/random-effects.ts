import { complementaryError } from '../normal-tail';

/** A mean of estimates that may differ by more than their errors. */
export interface RandomEffects {
  mean: number;
  error: number;
  /** Variance between estimates. */
  tau2: number;
  /** Cochran's Q and the chance of a larger one if all agreed. */
  q: number;
  p: number;
}

/**
 * Random-effects mean (DerSimonian & Laird 1986): weights 1 / (s^2 + tau^2) with tau^2 from Q.
 *
 * @param values at least one.
 * @param errors standard errors, > 0.
 */
export function randomEffectsMean(values: readonly number[], errors: readonly number[]): RandomEffects {
  const k = values.length;
  const weights = errors.map((s) => 1 / (s * s));
  const total = weights.reduce((a, b) => a + b, 0);
  const fixed = values.reduce((sum, x, i) => sum + weights[i] * x, 0) / total;
  const q = values.reduce((sum, x, i) => sum + weights[i] * (x - fixed) ** 2, 0);
  const squares = weights.reduce((a, b) => a + b * b, 0);
  const tau2 = k > 1 ? Math.max(0, (q - (k - 1)) / (total - squares / total)) : 0;
  const wide = errors.map((s) => 1 / (s * s + tau2));
  const wideTotal = wide.reduce((a, b) => a + b, 0);
  return {
    mean: values.reduce((sum, x, i) => sum + wide[i] * x, 0) / wideTotal,
    error: 1 / Math.sqrt(wideTotal),
    tau2,
    q,
    p: k > 1 ? chiSquareTail(q, k - 1) : 1,
  };
}

/** Chance of a chi-square above x, by the finite series for whole degrees of freedom. */
export function chiSquareTail(x: number, degrees: number): number {
  if (!(x > 0)) return 1;
  const half = x / 2;
  if (degrees % 2 === 0) {
    let term = Math.exp(-half);
    let sum = term;
    for (let i = 1; i < degrees / 2; i++) sum += term *= half / i;
    return sum;
  }
  let sum = complementaryError(Math.sqrt(half));
  let term = Math.exp(-half) / Math.sqrt(Math.PI * half);
  for (let i = 0; i < (degrees - 1) / 2; i++) sum += term *= half / (i + 0.5);
  return sum;
}
