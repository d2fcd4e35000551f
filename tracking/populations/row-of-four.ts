import type { Component, MixtureData } from './component';
import type { RowWork } from './row-work';

const FOUR_LN_2PI = 4 * Math.log(2 * Math.PI);

/**
 * Rows of four values: the same sums in the same order as for any number, written out. Fitting mixtures spends nearly
 * all its time here, and while tracks are being named other workers have little to do.
 */
export class RowOfFour implements RowWork {
  readonly latent = new Float64Array(4);
  readonly covariance = new Float64Array(16);
  /** Cholesky factor of the covariance with measurement errors, its lower triangle row by row. */
  private readonly factor = new Float64Array(10);
  /** The diagonal of the factor before roots were taken. */
  private readonly pivot = new Float64Array(4);
  private readonly mean = new Float64Array(4);
  private readonly residual = new Float64Array(4);
  /** The inverse of the covariance times the residual. */
  private readonly solved = new Float64Array(4);

  lnDensity(data: MixtureData, row: number, component: Component): number {
    this.factorise(data, row, component);
    const { pivot, residual, solved } = this;
    if (!(pivot[0] > 0 && pivot[1] > 0 && pivot[2] > 0 && pivot[3] > 0)) return Number.NaN;
    const lnDet = Math.log(pivot[0]) + Math.log(pivot[1]) + Math.log(pivot[2]) + Math.log(pivot[3]);
    const distance2 =
      residual[0] * solved[0] + residual[1] * solved[1] + residual[2] * solved[2] + residual[3] * solved[3];
    return -0.5 * (distance2 + lnDet + FOUR_LN_2PI);
  }

  condition(data: MixtureData, row: number, component: Component): void {
    this.factorise(data, row, component);
    const { latent, covariance, mean, solved } = this;
    const { covariance: c } = component;
    const [s0, s1, s2, s3] = [solved[0], solved[1], solved[2], solved[3]];
    latent[0] = mean[0] + (c[0] * s0 + c[1] * s1 + c[2] * s2 + c[3] * s3);
    latent[1] = mean[1] + (c[4] * s0 + c[5] * s1 + c[6] * s2 + c[7] * s3);
    latent[2] = mean[2] + (c[8] * s0 + c[9] * s1 + c[10] * s2 + c[11] * s3);
    latent[3] = mean[3] + (c[12] * s0 + c[13] * s1 + c[14] * s2 + c[15] * s3);
    for (let e = 0; e < 4; e++) {
      this.solve(c[e], c[4 + e], c[8 + e], c[12 + e]);
      const [w0, w1, w2, w3] = [solved[0], solved[1], solved[2], solved[3]];
      covariance[e] = c[e] - c[0] * w0 - c[1] * w1 - c[2] * w2 - c[3] * w3;
      covariance[4 + e] = c[4 + e] - c[4] * w0 - c[5] * w1 - c[6] * w2 - c[7] * w3;
      covariance[8 + e] = c[8 + e] - c[8] * w0 - c[9] * w1 - c[10] * w2 - c[11] * w3;
      covariance[12 + e] = c[12 + e] - c[12] * w0 - c[13] * w1 - c[14] * w2 - c[15] * w3;
    }
  }

  private factorise(data: MixtureData, row: number, { beta, covariance: c }: Component): void {
    const { factor, pivot, mean, residual } = this;
    const { value, variance } = data;
    const at = 4 * row;
    const p0 = c[0] + variance[at];
    const f00 = Math.sqrt(p0);
    const f10 = c[4] / f00;
    const p1 = c[5] + variance[at + 1] - f10 * f10;
    const f11 = Math.sqrt(p1);
    const f20 = c[8] / f00;
    const f21 = (c[9] - f20 * f10) / f11;
    const p2 = c[10] + variance[at + 2] - f20 * f20 - f21 * f21;
    const f22 = Math.sqrt(p2);
    const f30 = c[12] / f00;
    const f31 = (c[13] - f30 * f10) / f11;
    const f32 = (c[14] - f30 * f20 - f31 * f21) / f22;
    const p3 = c[15] + variance[at + 3] - f30 * f30 - f31 * f31 - f32 * f32;
    factor[0] = f00;
    factor[1] = f10;
    factor[2] = f11;
    factor[3] = f20;
    factor[4] = f21;
    factor[5] = f22;
    factor[6] = f30;
    factor[7] = f31;
    factor[8] = f32;
    factor[9] = Math.sqrt(p3);
    pivot[0] = p0;
    pivot[1] = p1;
    pivot[2] = p2;
    pivot[3] = p3;
    const coordinate = data.coordinate[row];
    mean[0] = beta[0] + beta[1] * coordinate + beta[2] * coordinate * coordinate;
    mean[1] = beta[3];
    mean[2] = beta[4];
    mean[3] = beta[5];
    residual[0] = value[at] - mean[0];
    residual[1] = value[at + 1] - mean[1];
    residual[2] = value[at + 2] - mean[2];
    residual[3] = value[at + 3] - mean[3];
    this.solve(residual[0], residual[1], residual[2], residual[3]);
  }

  /** Leaves the inverse of the factorised matrix times a vector in `solved`. */
  private solve(b0: number, b1: number, b2: number, b3: number): void {
    const { factor: f, solved } = this;
    const u0 = b0 / f[0];
    const u1 = (b1 - f[1] * u0) / f[2];
    const u2 = (b2 - f[3] * u0 - f[4] * u1) / f[5];
    const u3 = (b3 - f[6] * u0 - f[7] * u1 - f[8] * u2) / f[9];
    const s3 = u3 / f[9];
    const s2 = (u2 - f[8] * s3) / f[5];
    const s1 = (u1 - f[4] * s2 - f[7] * s3) / f[2];
    solved[0] = (u0 - f[1] * s1 - f[3] * s2 - f[6] * s3) / f[0];
    solved[1] = s1;
    solved[2] = s2;
    solved[3] = s3;
  }
}
