import { Z95 } from '../normal-tail';
import { studentHalfWidth } from '../student-t';

/** A distribution of one run: bin edges, one more than densities; band of 95 %, null where unknown. */
export interface RunPdf {
  edges: readonly number[];
  density: readonly number[];
  low: readonly (number | null)[];
  high: readonly (number | null)[];
}

/** The mean over runs on shared bins. */
export interface PooledPdf {
  edges: number[];
  /** Each run counts once, however many samples it has. */
  density: number[];
  /** 95 % interval of that mean, Student's t of the scatter between runs; the run's own band where there is one run. */
  low: (number | null)[];
  high: (number | null)[];
  /** Standard deviation between runs beyond what the bands of each explain; null with one run. */
  between: (number | null)[];
  /** Densities of each run on the shared bins. */
  runs: number[][];
}

/** Bins grow outwards as those of a single run. */
const GROWTH = 1.2;
const BINS_MOST = 1_000;
const LEVEL = 0.95;

/**
 * Pools distributions of several runs without making one sample of them: a run that was filmed longer must not
 * outweigh the others, and what differs between runs must show. Bins are those of the run with the widest core bins,
 * continued outwards; probability is conserved as it moves from bins to bins. The variance between runs follows by
 * moments, as the variance of the densities less the mean of their own variances (DerSimonian & Laird, Controlled
 * Clinical Trials 7, 177, 1986, with equal weights), and not below zero.
 *
 * @param runs at least one, edges ascending.
 * @throws RangeError without runs.
 */
export function poolPdfs(runs: readonly RunPdf[]): PooledPdf {
  if (runs.length === 0) throw new RangeError('A pooled distribution needs at least one run. Received none.');
  const edges = sharedEdges(runs);
  const bins = edges.length - 1;
  const rebinned = runs.map((run) => rebin(run, edges));
  const n = runs.length;
  const pooled: PooledPdf = {
    edges,
    density: new Array<number>(bins).fill(0),
    low: new Array<number | null>(bins).fill(null),
    high: new Array<number | null>(bins).fill(null),
    between: new Array<number | null>(bins).fill(null),
    runs: rebinned.map(({ density }) => density),
  };
  const t = n > 1 ? studentHalfWidth(LEVEL, n - 1) : Number.NaN;
  for (let b = 0; b < bins; b++) {
    const mean = rebinned.reduce((sum, { density }) => sum + density[b], 0) / n;
    pooled.density[b] = mean;
    if (n === 1) {
      const error = Z95 * Math.sqrt(rebinned[0].variance[b]);
      if (Number.isFinite(error)) [pooled.low[b], pooled.high[b]] = [Math.max(0, mean - error), mean + error];
      continue;
    }
    const scatter = rebinned.reduce((sum, { density }) => sum + (density[b] - mean) ** 2, 0) / (n - 1);
    const own = rebinned.reduce((sum, { variance }) => sum + variance[b], 0) / n;
    const error = t * Math.sqrt(scatter / n);
    pooled.low[b] = Math.max(0, mean - error);
    pooled.high[b] = mean + error;
    pooled.between[b] = Number.isFinite(own) ? Math.sqrt(Math.max(0, scatter - own)) : null;
  }
  return pooled;
}

function sharedEdges(runs: readonly RunPdf[]): number[] {
  const core = ({ edges }: RunPdf) => Math.min(...edges.slice(1).map((edge, i) => edge - edges[i]));
  const template = runs.reduce((widest, run) => (core(run) > core(widest) ? run : widest));
  const least = Math.min(...runs.map(({ edges }) => edges[0]));
  const most = Math.max(...runs.map(({ edges }) => edges[edges.length - 1]));
  const edges = [...template.edges];
  while (edges[edges.length - 1] < most && edges.length < BINS_MOST) {
    const last = edges.length - 1;
    edges.push(edges[last] + GROWTH * (edges[last] - edges[last - 1]));
  }
  while (edges[0] > least && edges.length < BINS_MOST) {
    edges.unshift(edges[0] - GROWTH * (edges[1] - edges[0]));
  }
  return edges;
}

/** Densities on other bins, and their variances where bands are known (bins taken as independent), else NaN. */
function rebin({ edges, density, low, high }: RunPdf, to: readonly number[]) {
  const out = new Array<number>(to.length - 1).fill(0);
  const variance = new Array<number>(to.length - 1).fill(0);
  let from = 0;
  for (let b = 0; b < out.length; b++) {
    const width = to[b + 1] - to[b];
    while (from > 0 && edges[from] > to[b]) from--;
    for (let i = from; i < density.length && edges[i] < to[b + 1]; i++) {
      const shared = Math.min(edges[i + 1], to[b + 1]) - Math.max(edges[i], to[b]);
      if (shared <= 0) continue;
      from = i;
      const weight = shared / width;
      out[b] += weight * density[i];
      const [below, above] = [low[i], high[i]];
      const error = below === null || above === null ? Number.NaN : (above - below) / (2 * Z95);
      variance[b] += (weight * error) ** 2;
    }
  }
  return { density: out, variance };
}
