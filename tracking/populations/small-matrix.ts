/** Symmetric matrices of a few rows, stored row by row in flat arrays. */

/**
 * Cholesky factor of a positive definite matrix, lower triangle, in place of `a`.
 * @returns ln det of the matrix, or NaN where it isn't positive definite.
 */
export function choleskyInPlace(a: Float64Array, n: number): number {
  let lnDet = 0;
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = a[i * n + j];
      for (let k = 0; k < j; k++) sum -= a[i * n + k] * a[j * n + k];
      if (i === j) {
        if (!(sum > 0)) return Number.NaN;
        a[i * n + i] = Math.sqrt(sum);
        lnDet += Math.log(sum);
      } else {
        a[i * n + j] = sum / a[j * n + j];
      }
    }
  }
  return lnDet;
}

/** Solves A x = b in place of `b`, with A's Cholesky factor. */
export function choleskySolve(factor: Float64Array, n: number, b: Float64Array): void {
  for (let i = 0; i < n; i++) {
    let sum = b[i];
    for (let k = 0; k < i; k++) sum -= factor[i * n + k] * b[k];
    b[i] = sum / factor[i * n + i];
  }
  for (let i = n - 1; i >= 0; i--) {
    let sum = b[i];
    for (let k = i + 1; k < n; k++) sum -= factor[k * n + i] * b[k];
    b[i] = sum / factor[i * n + i];
  }
}

/** Inverse of a positive definite matrix; null where it isn't one. */
export function inverse(a: Float64Array, n: number): Float64Array | null {
  const factor = a.slice();
  if (Number.isNaN(choleskyInPlace(factor, n))) return null;
  const out = new Float64Array(n * n);
  const column = new Float64Array(n);
  for (let j = 0; j < n; j++) {
    column.fill(0);
    column[j] = 1;
    choleskySolve(factor, n, column);
    for (let i = 0; i < n; i++) out[i * n + j] = column[i];
  }
  return out;
}
