import { choleskyInPlace, choleskySolve, inverse } from './small-matrix';

/** Data of a mixture: n rows of `dims` values with measurement variances, and one coordinate per row. */
export interface MixtureData {
  n: number;
  dims: number;
  value: Float64Array;
  variance: Float64Array;
  /** Coordinate on which the mean of the first value depends. */
  coordinate: Float64Array;
}

/** One Gaussian: mean of value 0 is beta0 + beta1 c + beta2 c^2, the others are constants. */
export interface Component {
  weight: number;
  /** beta0, beta1, beta2, then means of values 1 .. dims - 1. */
  beta: Float64Array;
  /** dims x dims, intrinsic: measurement errors excluded. */
  covariance: Float64Array;
}

export interface Mixture {
  components: Component[];
  lnLikelihood: number;
  iterations: number;
  converged: boolean;
}

/** Added to the diagonal of every covariance, in units of the standardised values. */
const RIDGE = 1e-4;
const QUADRATIC = 3;

/** Free parameters of k components: means with a quadratic, covariances, weights. */
export function mixtureParameters(k: number, dims: number): number {
  return k * (dims + 2 + (dims * (dims + 1)) / 2) + k - 1;
}

/** Responsibilities, n rows of k, and the log-likelihood under the components. */
export function responsibilities(data: MixtureData, components: Component[]) {
  const k = components.length;
  const out = new Float64Array(data.n * k);
  const work = new RowWork(data.dims);
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
  const work = new RowWork(dims);
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
  let q = start;
  let before = -Infinity;
  for (let iteration = 1; ; iteration++) {
    for (let j = 0; j < k; j++) if (!maximise(data, q, k, j, components[j], iteration === 1)) return null;
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
  for (let step = 0; step < steps; step++) {
    const { responsibilities: q, lnLikelihood } = responsibilities(data, components);
    if (!Number.isFinite(lnLikelihood)) return null;
    for (let j = 0; j < k; j++) if (!maximise(data, q, k, j, components[j], false, rowWeight)) return null;
  }
  return components;
}

/** Updates one component from the responsibilities; false where it has lost its members. */
function maximise(
  data: MixtureData,
  q: Float64Array,
  k: number,
  j: number,
  c: Component,
  isStart: boolean,
  rowWeight?: ArrayLike<number>,
): boolean {
  const { n, dims } = data;
  const work = new RowWork(dims);
  const precision = inverse(c.covariance, dims);
  if (!precision) return false;
  const latent = new Float64Array(n * dims);
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

/** Mean of a component at a coordinate. */
export function meanAt(c: Component, coordinate: number, dims: number, out: Float64Array): void {
  out[0] = c.beta[0] + c.beta[1] * coordinate + c.beta[2] * coordinate * coordinate;
  for (let d = 1; d < dims; d++) out[d] = c.beta[QUADRATIC - 1 + d];
}

/** Scratch for one row at a time. */
class RowWork {
  readonly latent: Float64Array;
  readonly covariance: Float64Array;
  private readonly factor: Float64Array;
  private readonly residual: Float64Array;
  private readonly solved: Float64Array;
  private readonly mean: Float64Array;
  private readonly column: Float64Array;

  constructor(private readonly dims: number) {
    this.latent = new Float64Array(dims);
    this.covariance = new Float64Array(dims * dims);
    this.factor = new Float64Array(dims * dims);
    this.residual = new Float64Array(dims);
    this.solved = new Float64Array(dims);
    this.mean = new Float64Array(dims);
    this.column = new Float64Array(dims);
  }

  private factorise(data: MixtureData, i: number, c: Component): number {
    const { dims } = this;
    this.factor.set(c.covariance);
    for (let d = 0; d < dims; d++) this.factor[d * dims + d] += data.variance[i * dims + d];
    meanAt(c, data.coordinate[i], dims, this.mean);
    for (let d = 0; d < dims; d++) this.residual[d] = data.value[i * dims + d] - this.mean[d];
    this.solved.set(this.residual);
    const lnDet = choleskyInPlace(this.factor, dims);
    choleskySolve(this.factor, dims, this.solved);
    return lnDet;
  }

  lnDensity(data: MixtureData, i: number, c: Component): number {
    const lnDet = this.factorise(data, i, c);
    let distance2 = 0;
    for (let d = 0; d < this.dims; d++) distance2 += this.residual[d] * this.solved[d];
    return -0.5 * (distance2 + lnDet + this.dims * Math.log(2 * Math.PI));
  }

  /** Mean and covariance of the true values of a row, given what was measured. */
  condition(data: MixtureData, i: number, c: Component): void {
    const { dims } = this;
    this.factorise(data, i, c);
    const { column } = this;
    for (let d = 0; d < dims; d++) {
      let shift = 0;
      for (let e = 0; e < dims; e++) shift += c.covariance[d * dims + e] * this.solved[e];
      this.latent[d] = this.mean[d] + shift;
    }
    for (let e = 0; e < dims; e++) {
      for (let d = 0; d < dims; d++) column[d] = c.covariance[d * dims + e];
      choleskySolve(this.factor, dims, column);
      for (let d = 0; d < dims; d++) {
        let sum = c.covariance[d * dims + e];
        for (let f = 0; f < dims; f++) sum -= c.covariance[d * dims + f] * column[f];
        this.covariance[d * dims + e] = sum;
      }
    }
  }
}
