/**
 * Factors a symmetric positive definite matrix into L L^T, in place in its lower triangle.
 *
 * @param matrix row by row, `size` rows of `stride` numbers.
 * @returns false where it isn't positive definite.
 */
export function choleskyFactor(matrix: Float64Array, size: number, stride: number): boolean {
  for (let i = 0; i < size; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = matrix[i * stride + j];
      for (let k = 0; k < j; k++) sum -= matrix[i * stride + k] * matrix[j * stride + k];
      if (i === j) {
        if (!(sum > 0)) return false;
        matrix[i * stride + i] = Math.sqrt(sum);
      } else {
        matrix[i * stride + j] = sum / matrix[j * stride + j];
      }
    }
  }
  return true;
}

/** Solves L L^T x = b in place of b. */
export function choleskySolve(factor: Float64Array, size: number, stride: number, b: Float64Array): void {
  for (let i = 0; i < size; i++) {
    let sum = b[i];
    for (let k = 0; k < i; k++) sum -= factor[i * stride + k] * b[k];
    b[i] = sum / factor[i * stride + i];
  }
  for (let i = size - 1; i >= 0; i--) {
    let sum = b[i];
    for (let k = i + 1; k < size; k++) sum -= factor[k * stride + i] * b[k];
    b[i] = sum / factor[i * stride + i];
  }
}

/** Diagonal of the inverse of L L^T, i.e. the variances where that is the information matrix. */
export function choleskyInverseDiagonal(
  factor: Float64Array,
  size: number,
  stride: number,
  scratch: Float64Array,
  diagonal: Float64Array,
): void {
  for (let c = 0; c < size; c++) {
    // Column c of L^-1; the inverse's diagonal is the sum of its squares.
    let total = 0;
    for (let i = c; i < size; i++) {
      let sum = i === c ? 1 : 0;
      for (let k = c; k < i; k++) sum -= factor[i * stride + k] * scratch[k];
      scratch[i] = sum / factor[i * stride + i];
      total += scratch[i] * scratch[i];
    }
    diagonal[c] = total;
  }
}
