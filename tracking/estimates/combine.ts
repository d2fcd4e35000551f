import { notUsable, type DensityResult } from './interval';
import { randomEffectsMean } from './random-effects';
import type { EstimateMethod } from './estimate';

/** Methods that share tracers and thickness err together and count as one. */
const TOGETHER: readonly EstimateMethod[] = [
  'crossings',
  'neighbour-distance',
  'beads-per-length',
  'marked-chains',
];
/** The prior is an expectation, not a measurement. */
const LEFT_OUT: readonly EstimateMethod[] = ['heat-flux-prior', 'combined'];
/** Results that agree are further apart than theirs in less than this share of cases. */
const DISAGREE_BELOW = 0.01;

/**
 * One line density from the methods that could be used: those that share their inputs are averaged
 * first, then a random-effects mean of ln L. No value where they disagree.
 */
export function combine(results: readonly DensityResult[]): DensityResult {
  const method = 'combined';
  const usable = results.filter((r) => r.valueM2 !== null && !LEFT_OUT.includes(r.method));
  if (usable.length === 0) {
    return notUsable(method, 'No method that measures the tangle could be used.', inputsOf(results));
  }
  const inputs = inputsOf(usable);
  const together = usable.filter((r) => TOGETHER.includes(r.method));
  const alone = usable.filter((r) => !TOGETHER.includes(r.method));
  const groups = [...(together.length > 0 ? [together] : []), ...alone.map((r) => [r])].map(oneOf);
  const mean = randomEffectsMean(
    groups.map((g) => g.lnL),
    groups.map((g) => Math.hypot(g.statistical, g.systematic)),
  );
  if (mean.p < DISAGREE_BELOW) {
    const note = `The methods disagree (chance ${mean.p.toPrecision(2)}), so there is no combined value.`;
    return notUsable(method, note, inputs);
  }
  // Errors of chance add up with the weights of the mean; the rest of its error is systematic.
  const weights = groups.map((g) => 1 / (g.statistical ** 2 + g.systematic ** 2 + mean.tau2));
  const total = weights.reduce((a, b) => a + b, 0);
  const statistical = Math.hypot(...groups.map((g, i) => (weights[i] / total) * g.statistical));
  return {
    method,
    valueM2: Math.exp(mean.mean),
    statistical,
    systematic: Math.sqrt(Math.max(0, mean.error ** 2 - statistical ** 2)),
    inputs,
    note:
      usable.length === 1
        ? `Only ${usable[0].method} could be used.`
        : `Random-effects mean of ${usable.map((r) => r.method).join(', ')}; methods that share tracers count as one.`,
  };
}

/** Average of results that err together: weights by error, but no gain in it. */
function oneOf(results: readonly DensityResult[]) {
  const errors = results.map((r) => Math.hypot(r.statistical, r.systematic));
  const weights = errors.map((s) => 1 / (s * s));
  const total = weights.reduce((a, b) => a + b, 0);
  const average = (of: (r: DensityResult) => number) =>
    results.reduce((sum, r, i) => sum + (weights[i] / total) * of(r), 0);
  return {
    lnL: average((r) => Math.log(r.valueM2 ?? Number.NaN)),
    statistical: average((r) => r.statistical),
    systematic: average((r) => r.systematic),
  };
}

function inputsOf(results: readonly DensityResult[]) {
  return Object.fromEntries(results.map((r) => [r.method, { value: r.valueM2, unit: 'm^-2' }]));
}
