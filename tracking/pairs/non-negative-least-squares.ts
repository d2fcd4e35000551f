/**
 * Weighted least squares with coefficients >= 0 for at most 3 columns: every set of active columns
 * is solved and the best one without negative coefficients kept, which is exact. All columns come
 * first: where none of their coefficients is negative nothing can be better.
 *
 * @param rows n rows of `columns` values.
 * @returns coefficients, and their standard errors when weights are inverse variances (0 for a
 *   coefficient at its bound).
 */
export function nonNegativeLeastSquares(
  rows: Float64Array,
  y: Float64Array,
  weights: Float64Array,
  columns: number,
): { x: Float64Array<ArrayBuffer>; errors: Float64Array<ArrayBuffer> } {
  const normal = new Float64Array(columns * columns);
  const right = new Float64Array(columns);
  for (let i = 0; i < y.length; i++) {
    for (let a = 0; a < columns; a++) {
      const wa = weights[i] * rows[i * columns + a];
      if (wa === 0) continue;
      right[a] += wa * y[i];
      for (let b = a; b < columns; b++) normal[a * columns + b] += wa * rows[i * columns + b];
    }
  }
  for (let a = 0; a < columns; a++)
    for (let b = 0; b < a; b++) normal[a * columns + b] = normal[b * columns + a];
  const best = { x: new Float64Array(columns), errors: new Float64Array(columns) };
  let bestGain = 0;
  for (let set = (1 << columns) - 1; set > 0; set--) {
    const active: number[] = [];
    for (let a = 0; a < columns; a++) if (set & (1 << a)) active.push(a);
    const solved = solve(normal, right, columns, active);
    if (!solved || solved.x.some((v) => v < 0)) continue;
    // The residual falls by x . right for the solution of the normal equations.
    const gain = active.reduce((sum, a, i) => sum + solved.x[i] * right[a], 0);
    if (gain <= bestGain) continue;
    bestGain = gain;
    best.x.fill(0);
    best.errors.fill(0);
    active.forEach((a, i) => {
      best.x[a] = solved.x[i];
      best.errors[a] = Math.sqrt(Math.max(0, solved.variance[i]));
    });
    if (active.length === columns) break;
  }
  return best;
}

/** Solves the active part of the normal equations by Gauss-Jordan; null where it is singular. */
function solve(normal: Float64Array, right: Float64Array, columns: number, active: number[]) {
  const m = active.length;
  const wide = 2 * m + 1;
  const a = new Float64Array(m * wide);
  for (let i = 0; i < m; i++) {
    for (let j = 0; j < m; j++) a[i * wide + j] = normal[active[i] * columns + active[j]];
    a[i * wide + m] = right[active[i]];
    a[i * wide + m + 1 + i] = 1;
  }
  for (let i = 0; i < m; i++) {
    const pivot = a[i * wide + i];
    // Relative to the column's own weight, so that units don't matter.
    if (!(pivot > 1e-12 * normal[active[i] * columns + active[i]]) || pivot === 0) return null;
    for (let j = 0; j < wide; j++) a[i * wide + j] /= pivot;
    for (let k = 0; k < m; k++) {
      if (k === i) continue;
      const factor = a[k * wide + i];
      for (let j = 0; j < wide; j++) a[k * wide + j] -= factor * a[i * wide + j];
    }
  }
  return {
    x: active.map((_, i) => a[i * wide + m]),
    variance: active.map((_, i) => a[i * wide + m + 1 + i]),
  };
}
