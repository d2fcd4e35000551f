/** Room for the normal equations of at most 3 columns. */
const COLUMNS_MAX = 3;

/** Normal equations of weighted least squares with at most 3 columns, and their solution. */
export class NonNegativeLeastSquares {
  /** Coefficients, >= 0. */
  readonly x = new Float64Array(COLUMNS_MAX);
  /** Standard errors when weights are inverse variances; 0 for a coefficient at its bound. */
  readonly errors = new Float64Array(COLUMNS_MAX);
  private readonly normal = new Float64Array(COLUMNS_MAX * COLUMNS_MAX);
  private readonly right = new Float64Array(COLUMNS_MAX);
  private readonly wide = new Float64Array(COLUMNS_MAX * (2 * COLUMNS_MAX + 1));
  private readonly active = new Uint8Array(COLUMNS_MAX);

  /**
   * Weighted least squares with coefficients >= 0: every set of active columns is solved and the
   * best one without negative coefficients kept, which is exact. All columns come first: where
   * none of their coefficients is negative nothing can be better.
   *
   * @param rows n rows of `columns` values; the first n of `y` and `weights` belong to them.
   */
  solve(rows: Float64Array, y: Float64Array, weights: Float64Array, n: number, columns: number): void {
    const { normal, right, x, errors } = this;
    normal.fill(0);
    right.fill(0);
    for (let i = 0; i < n; i++) {
      for (let a = 0; a < columns; a++) {
        const wa = weights[i] * rows[i * columns + a];
        if (wa === 0) continue;
        right[a] += wa * y[i];
        for (let b = a; b < columns; b++) normal[a * COLUMNS_MAX + b] += wa * rows[i * columns + b];
      }
    }
    for (let a = 0; a < columns; a++) {
      for (let b = 0; b < a; b++) normal[a * COLUMNS_MAX + b] = normal[b * COLUMNS_MAX + a];
    }
    x.fill(0);
    errors.fill(0);
    let bestGain = 0;
    const all = (1 << columns) - 1;
    for (let set = all; set > 0; set--) {
      const m = this.eliminate(set, columns);
      if (m === 0) continue;
      // The residual falls by x . right for the solution of the normal equations.
      let gain = 0;
      let allowed = true;
      for (let i = 0; i < m; i++) {
        const value = this.wide[i * (2 * m + 1) + m];
        if (value < 0) allowed = false;
        gain += value * right[this.active[i]];
      }
      if (!allowed || gain <= bestGain) continue;
      bestGain = gain;
      x.fill(0);
      errors.fill(0);
      for (let i = 0; i < m; i++) {
        x[this.active[i]] = this.wide[i * (2 * m + 1) + m];
        errors[this.active[i]] = Math.sqrt(Math.max(0, this.wide[i * (2 * m + 1) + m + 1 + i]));
      }
      if (set === all) break;
    }
  }

  /** Gauss-Jordan of the active part, with its inverse; the number of active columns, 0 where singular. */
  private eliminate(set: number, columns: number): number {
    const { active, normal, right, wide } = this;
    let m = 0;
    for (let a = 0; a < columns; a++) if (set & (1 << a)) active[m++] = a;
    const width = 2 * m + 1;
    wide.fill(0);
    for (let i = 0; i < m; i++) {
      for (let j = 0; j < m; j++) wide[i * width + j] = normal[active[i] * COLUMNS_MAX + active[j]];
      wide[i * width + m] = right[active[i]];
      wide[i * width + m + 1 + i] = 1;
    }
    for (let i = 0; i < m; i++) {
      const pivot = wide[i * width + i];
      // Relative to the column's own weight, so that units don't matter.
      if (!(pivot > 1e-12 * normal[active[i] * COLUMNS_MAX + active[i]])) return 0;
      for (let j = 0; j < width; j++) wide[i * width + j] /= pivot;
      for (let k = 0; k < m; k++) {
        if (k === i) continue;
        const factor = wide[k * width + i];
        for (let j = 0; j < width; j++) wide[k * width + j] -= factor * wide[i * width + j];
      }
    }
    return m;
  }
}
