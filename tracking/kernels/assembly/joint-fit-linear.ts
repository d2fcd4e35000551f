import { PARAMETERS_MOST } from './joint-fit-layout';

const ROW: usize = (<usize>PARAMETERS_MOST) << 3;

/** Factors a symmetric positive definite matrix into L L^T in its lower triangle; false where it isn't one. */
export function choleskyFactor(matrix: usize, size: i32): bool {
  for (let i: i32 = 0; i < size; i++) {
    const rowI = matrix + <usize>i * ROW;
    for (let j: i32 = 0; j < i; j++) {
      const rowJ = matrix + <usize>j * ROW;
      let sum = load<f64>(rowI + ((<usize>j) << 3));
      for (let k: i32 = 0; k < j; k++) {
        sum -= load<f64>(rowI + ((<usize>k) << 3)) * load<f64>(rowJ + ((<usize>k) << 3));
      }
      // The diagonal holds reciprocals: dividing is what takes the time.
      store<f64>(rowI + ((<usize>j) << 3), sum * load<f64>(rowJ + ((<usize>j) << 3)));
    }
    let sum = load<f64>(rowI + ((<usize>i) << 3));
    for (let k: i32 = 0; k < i; k++) {
      const value = load<f64>(rowI + ((<usize>k) << 3));
      sum -= value * value;
    }
    if (!(sum > 0)) return false;
    store<f64>(rowI + ((<usize>i) << 3), 1 / sqrt<f64>(sum));
  }
  return true;
}

/** Solves L L^T x = b in place of b. */
export function choleskySolve(factor: usize, size: i32, b: usize): void {
  for (let i: i32 = 0; i < size; i++) {
    const row = factor + <usize>i * ROW;
    let sum = load<f64>(b + ((<usize>i) << 3));
    for (let k: i32 = 0; k < i; k++)
      sum -= load<f64>(row + ((<usize>k) << 3)) * load<f64>(b + ((<usize>k) << 3));
    store<f64>(b + ((<usize>i) << 3), sum * load<f64>(row + ((<usize>i) << 3)));
  }
  for (let i: i32 = size - 1; i >= 0; i--) {
    let sum = load<f64>(b + ((<usize>i) << 3));
    for (let k: i32 = i + 1; k < size; k++) {
      sum -= load<f64>(factor + <usize>k * ROW + ((<usize>i) << 3)) * load<f64>(b + ((<usize>k) << 3));
    }
    store<f64>(b + ((<usize>i) << 3), sum * load<f64>(factor + <usize>i * ROW + ((<usize>i) << 3)));
  }
}

/** Diagonal of the inverse of L L^T: variances where that is the information. `scratch` holds `size` numbers. */
export function choleskyInverseDiagonal(factor: usize, size: i32, scratch: usize, diagonal: usize): void {
  for (let c: i32 = 0; c < size; c++) {
    let total: f64 = 0;
    for (let i: i32 = c; i < size; i++) {
      const row = factor + <usize>i * ROW;
      let sum: f64 = i === c ? 1 : 0;
      for (let k: i32 = c; k < i; k++) {
        sum -= load<f64>(row + ((<usize>k) << 3)) * load<f64>(scratch + ((<usize>k) << 3));
      }
      const value = sum * load<f64>(row + ((<usize>i) << 3));
      store<f64>(scratch + ((<usize>i) << 3), value);
      total += value * value;
    }
    store<f64>(diagonal + ((<usize>c) << 3), total);
  }
}
