import { meanAt, QUADRATIC, type Component, type MixtureData } from './component';
import { RowOfAny } from './row-of-any';
import { RowOfFour } from './row-of-four';
import type { RowWork } from './row-work';
import { choleskyInPlace, choleskySolve, inverse } from './small-matrix';

export interface Mixture {
  components: Component[];
  lnLikelihood: number;
  iterations: number;
  converged: boolean;
}

/** Added to the diagonal of every covariance, in units of the standardised values. */
const RIDGE = 1e-4;

/** Tracks have four features, for which everything is written out; the two agree to the bit. */
const rowWork = (dims: number): RowWork => (dims === 4 ? new RowOfFour() : new RowOfAny(dims));

/** Free parameters of k components: means with a quadratic, covariances, weights. */
export function mixtureParameters(k: number, dims: number): number {
  return k * (dims + 2 + (dims * (dims + 1)) / 2) + k - 1;
}

/** Responsibilities, n rows of k, and the log-likelihood under the components. */
export function responsibilities(data: MixtureData, components: Component[]) {
  const k = components.length;
  const out = new Float64Array(data.n * k);
  const work = rowWork(data.dims);
  const lnTerms = new Float64Array(k);
  let lnLikelihood = 0;
  for (let i = 0; i < data.n; i++) {
    let top = -Infinity;
    for (let j = 0; j < k; j++) {
      lnTerms[j] = Math.log(components[j].weight) + work.lnDensity(data, i, components[j]);
      top = Math.max(top, lnTerms[j]);
    }
    let sum = 0;
    for (let j = 0; j < k; j++) sum += Math.exp(lnTerms[j] - top);
    const lnSum = top + Math.log(sum);
    lnLikelihood += lnSum;
    for (let j = 0; j < k; j++) out[i * k + j] = Math.exp(lnTerms[j] - lnSum);
  }
  return { responsibilities: out, lnLikelihood };
}

/** Gives ln density of a row under a component, measurement errors included; its scratch is used again. */
export function densityMeter(dims: number): (data: MixtureData, row: number, component: Component) => number {
  const work = rowWork(dims);
  return (data, row, component) => work.lnDensity(data, row, component);
}

/** A component of the first values alone: the others are left open. */
export function marginal(component: Component, dims: number, kept: number): Component {
  const covariance = new Float64Array(kept * kept);
  for (let d = 0; d < kept; d++)
    for (let e = 0; e < kept; e++) covariance[d * kept + e] = component.covariance[d * dims + e];
  return { weight: component.weight, beta: component.beta.slice(0, kept + 2), covariance };
}

/**
 * Expectation-maximisation for Gaussians seen through known measurement errors (Bovy, Hogg &
 * Roweis, Ann. Appl. Stat. 5, 1657 (2011)), the mean of the first value a quadratic in a
 * coordinate. Starts from a first guess of responsibilities.
 */
export function fitMixture(
  data: MixtureData,
  start: Float64Array,
  k: number,
  limits: { iterationsMax: number; relativeChange: number } = { iterationsMax: 500, relativeChange: 1e-6 },
): Mixture | null {
  let components = Array.from({ length: k }, () => blank(data.dims));
  const room = roomFor(data);
  let q = start;
  let before = -Infinity;
  for (let iteration = 1; ; iteration++) {
    for (let j = 0; j < k; j++)
      if (!maximise(room, data, q, k, j, components[j], iteration === 1)) return null;
    const step = responsibilities(data, components);
    if (!Number.isFinite(step.lnLikelihood)) return null;
    q = step.responsibilities;
    const change = Math.abs(step.lnLikelihood - before) / Math.max(1, Math.abs(step.lnLikelihood));
    before = step.lnLikelihood;
    const converged = change < limits.relativeChange;
    if (converged || iteration >= limits.iterationsMax) {
      components = components.map((c) => ({ ...c }));
      return { components, lnLikelihood: before, iterations: iteration, converged };
    }
  }
}

/** What one step of maximising works with, used again by the next. */
interface Room {
  work: RowWork;
  /** Rows of true values as far as they are known. */
  latent: Float64Array;
}

const roomFor = ({ n, dims }: MixtureData): Room => ({
  work: rowWork(dims),
  latent: new Float64Array(n * dims),
});

function blank(dims: number): Component {
  const covariance = new Float64Array(dims * dims);
  for (let d = 0; d < dims; d++) covariance[d * dims + d] = 1;
  return { weight: 1, beta: new Float64Array(dims + 2), covariance };
}

/**
 * The mixture that fits some rows several times and others not at all, by a few steps from one that fits all.
 *
 * @param rowWeight how often each row counts, as often as there are rows in all.
 * @returns null where a component lost its members.
 */
export function refitMixture(
  data: MixtureData,
  from: readonly Component[],
  rowWeight: ArrayLike<number>,
  steps: number,
): Component[] | null {
  const k = from.length;
  const components = from.map(({ weight, beta, covariance }) => ({
    weight,
    beta: beta.slice(),
    covariance: covariance.slice(),
  }));
  const room = roomFor(data);
  for (let step = 0; step < steps; step++) {
    const { responsibilities: q, lnLikelihood } = responsibilities(data, components);
    if (!Number.isFinite(lnLikelihood)) return null;
    for (let j = 0; j < k; j++)
      if (!maximise(room, data, q, k, j, components[j], false, rowWeight)) return null;
  }
  return components;
}

/** Updates one component from the responsibilities; false where it has lost its members. */
function maximise(
  { work, latent }: Room,
  data: MixtureData,
  q: Float64Array,
  k: number,
  j: number,
  c: Component,
  isStart: boolean,
  rowWeight?: ArrayLike<number>,
): boolean {
  const { n, dims } = data;
  const precision = inverse(c.covariance, dims);
  if (!precision) return false;
  const spread = new Float64Array(dims * dims);
  // Sums of weight * coordinate^m, and of weight * coordinate^m * value, m = 0..2, per value.
  const powers = new Float64Array(2 * QUADRATIC - 1);
  const moments = new Float64Array(QUADRATIC * dims);

  for (let i = 0; i < n; i++) {
    const weight = q[i * k + j] * (rowWeight ? rowWeight[i] : 1);
    // At the start there is no component yet to shrink towards, so the values stand for themselves.
    if (isStart) for (let d = 0; d < dims; d++) work.latent[d] = data.value[i * dims + d];
    else work.condition(data, i, c);
    const at = data.coordinate[i];
    for (let m = 0, w = weight; m < powers.length; m++, w *= at) powers[m] += w;
    for (let d = 0; d < dims; d++) {
      latent[i * dims + d] = work.latent[d];
      for (let m = 0, w = weight; m < QUADRATIC; m++, w *= at)
        moments[d * QUADRATIC + m] += w * work.latent[d];
    }
    if (!isStart) for (let e = 0; e < dims * dims; e++) spread[e] += weight * work.covariance[e];
  }
  const total = powers[0];
  if (!(total > dims + 2)) return false;
  if (!solveMeans(c, dims, precision, powers, moments)) return false;

  const mean = new Float64Array(dims);
  for (let i = 0; i < n; i++) {
    const weight = q[i * k + j] * (rowWeight ? rowWeight[i] : 1);
    meanAt(c, data.coordinate[i], dims, mean);
    for (let d = 0; d < dims; d++) {
      const rd = weight * (latent[i * dims + d] - mean[d]);
      for (let e = 0; e < dims; e++) spread[d * dims + e] += rd * (latent[i * dims + e] - mean[e]);
    }
  }
  for (let e = 0; e < dims * dims; e++) c.covariance[e] = spread[e] / total;
  for (let d = 0; d < dims; d++) c.covariance[d * dims + d] += RIDGE;
  c.weight = total / n;
  return true;
}

/**
 * Means by generalised least squares: value 0 has the design (1, c, c^2), the others a constant, so
 * that the normal equations need sums over rows only.
 */
function solveMeans(
  c: Component,
  dims: number,
  precision: Float64Array,
  powers: Float64Array,
  moments: Float64Array,
): boolean {
  const p = dims + 2;
  const normal = new Float64Array(p * p);
  const right = new Float64Array(p);
  // Parameter a belongs to value valueOf(a) and to this power of the coordinate.
  const valueOf = (a: number) => Math.max(0, a - QUADRATIC + 1);
  const powerOf = (a: number) => (a < QUADRATIC ? a : 0);
  for (let a = 0; a < p; a++) {
    const row = valueOf(a) * dims;
    for (let b = 0; b < p; b++)
      normal[a * p + b] = precision[row + valueOf(b)] * powers[powerOf(a) + powerOf(b)];
    for (let e = 0; e < dims; e++) right[a] += precision[row + e] * moments[e * QUADRATIC + powerOf(a)];
    normal[a * p + a] += 1e-9 * powers[0];
  }
  if (Number.isNaN(choleskyInPlace(normal, p))) return false;
  choleskySolve(normal, p, right);
  c.beta.set(right);
  return true;
}
