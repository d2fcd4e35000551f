import { Z95 } from '../normal-tail';
import { studentHalfWidth } from '../student-t';

/** Above this many clusters Student's t is the normal distribution to 1 %. */
const CLUSTERS_MANY = 200;
/** With fewer clusters than this an interval says nothing. */
const CLUSTERS_LEAST = 3;

/** A ratio of sums with its standard error. */
export interface ClusteredRatio {
  value: number;
  /** NaN where fewer than 3 clusters hold anything. */
  error: number;
  low: number | null;
  high: number | null;
  /** Clusters that hold something. */
  clusters: number;
  /** What was counted below the line. */
  count: number;
}

/**
 * Sums over clusters (whole tracks, or all tracks of one line) whose samples depend on each other, and
 * the error of their ratio from the scatter between clusters: var R = sum (s - R n)^2 / N^2 (delta
 * method, Cochran 1977), the 95 % interval by Student's t.
 */
export class ClusteredRatios {
  private readonly s: Float64Array;
  private readonly n: Float64Array;
  private readonly ss: Float64Array;
  private readonly sn: Float64Array;
  private readonly nn: Float64Array;
  private readonly clusters: Uint32Array;

  constructor(readonly columns: number) {
    [this.s, this.n, this.ss, this.sn, this.nn] = [0, 1, 2, 3, 4].map(() => new Float64Array(columns));
    this.clusters = new Uint32Array(columns);
  }

  /** Adds one cluster: `sum` and `count` of every column from an offset on. */
  add(sum: ArrayLike<number>, count: ArrayLike<number>, offset = 0): void {
    for (let c = 0; c < this.columns; c++) {
      const s = sum[offset + c];
      const n = count[offset + c];
      if (n === 0) continue;
      this.s[c] += s;
      this.n[c] += n;
      this.ss[c] += s * s;
      this.sn[c] += s * n;
      this.nn[c] += n * n;
      this.clusters[c]++;
    }
  }

  /** sum / count of a column. */
  ratio(c: number): ClusteredRatio {
    const clusters = this.clusters[c];
    const value = this.s[c] / this.n[c];
    const square = this.ss[c] - 2 * value * this.sn[c] + value * value * this.nn[c];
    const few = clusters < CLUSTERS_LEAST;
    const error = few ? Number.NaN : Math.sqrt(Math.max(0, square) * (clusters / (clusters - 1))) / this.n[c];
    const half = error * widthOf(clusters);
    return {
      value,
      error,
      low: few ? null : value - half,
      high: few ? null : value + half,
      clusters,
      count: this.n[c],
    };
  }

  /**
   * A total as of independent clusters that come as a Poisson process: its relative error is
   * sqrt(sum n^2) / sum n.
   */
  total(c: number): { value: number; relativeError: number } {
    return { value: this.n[c], relativeError: Math.sqrt(this.nn[c]) / this.n[c] };
  }
}

const known = new Map<number, number>();

/** Half width of a 95 % interval in standard errors. */
export function widthOf(clusters: number): number {
  if (clusters > CLUSTERS_MANY) return Z95;
  const degrees = Math.max(1, clusters - 1);
  let width = known.get(degrees);
  if (width === undefined) known.set(degrees, (width = studentHalfWidth(0.95, degrees)));
  return width;
}
