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

/** Updates one component from the responsibilities; false where it has lost its members. */
function maximise(
  data: MixtureData,
  q: Float64Array,
  k: number,
  j: number,
  c: Component,
  isStart: boolean,
): boolean {
  const { n, dims } = data;
  const p = dims + 2;
  const work = new RowWork(dims);
  const precision = inverse(c.covariance, dims);
  if (!precision) return false;
  const normal = new Float64Array(p * p);
  const right = new Float64Array(p);
  const latent = new Float64Array(n * dims);
  const spread = new Float64Array(dims * dims);
  const row = new Float64Array(p);
  let total = 0;

  for (let i = 0; i < n; i++) {
    const weight = q[i * k + j];
    total += weight;
    // At the start there is no component yet to shrink towards, so the values stand for themselves.
    if (isStart) for (let d = 0; d < dims; d++) work.latent[d] = data.value[i * dims + d];
    else work.condition(data, i, c);
    for (let d = 0; d < dims; d++) latent[i * dims + d] = work.latent[d];
    if (!isStart) for (let e = 0; e < dims * dims; e++) spread[e] += weight * work.covariance[e];
    for (let d = 0; d < dims; d++) {
      designRow(row, d, data.coordinate[i]);
      for (let e = 0; e < dims; e++) {
        const w = weight * precision[d * dims + e];
        addDesign(normal, right, row, w, e, data.coordinate[i], work.latent[e], p);
      }
    }
  }
  if (!(total > dims + 2)) return false;
  for (let a = 0; a < p; a++) normal[a * p + a] += 1e-9 * total;
  if (Number.isNaN(choleskyInPlace(normal, p))) return false;
  choleskySolve(normal, p, right);
  c.beta.set(right);

  const mean = new Float64Array(dims);
  for (let i = 0; i < n; i++) {
    const weight = q[i * k + j];
    meanAt(c, data.coordinate[i], dims, mean);
    for (let d = 0; d < dims; d++) {
      const rd = latent[i * dims + d] - mean[d];
      for (let e = 0; e < dims; e++) spread[d * dims + e] += weight * rd * (latent[i * dims + e] - mean[e]);
    }
  }
  for (let e = 0; e < dims * dims; e++) c.covariance[e] = spread[e] / total;
  for (let d = 0; d < dims; d++) c.covariance[d * dims + d] += RIDGE;
  c.weight = total / n;
  return true;
}

/** Row d of the design: (1, c, c^2) for value 0, a single 1 for the others. */
function designRow(row: Float64Array, d: number, coordinate: number): void {
  row.fill(0);
  if (d === 0) {
    row[0] = 1;
    row[1] = coordinate;
    row[2] = coordinate * coordinate;
  } else {
    row[QUADRATIC - 1 + d] = 1;
  }
}

/** Adds w * row' row_e to the normal equations and w * row' y to the right side. */
function addDesign(
  normal: Float64Array,
  right: Float64Array,
  row: Float64Array,
  w: number,
  e: number,
  c: number,
  y: number,
  p: number,
): void {
  for (let a = 0; a < p; a++) {
    if (row[a] === 0) continue;
    const wa = w * row[a];
    right[a] += wa * y;
    if (e === 0) {
      normal[a * p] += wa;
      normal[a * p + 1] += wa * c;
      normal[a * p + 2] += wa * c * c;
    } else {
      normal[a * p + QUADRATIC - 1 + e] += wa;
    }
  }
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

  constructor(private readonly dims: number) {
    this.latent = new Float64Array(dims);
    this.covariance = new Float64Array(dims * dims);
    this.factor = new Float64Array(dims * dims);
    this.residual = new Float64Array(dims);
    this.solved = new Float64Array(dims);
    this.mean = new Float64Array(dims);
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
    const column = new Float64Array(dims);
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
