import { meanAt, type Component, type MixtureData } from './component';
import type { RowWork } from './row-work';
import { choleskyInPlace, choleskySolve } from './small-matrix';

/** Rows of any number of values. */
export class RowOfAny implements RowWork {
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
