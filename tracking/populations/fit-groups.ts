import { kmeans } from 'ml-kmeans';
import { createRandom, mixSeed } from '../random';
import type { MixtureData } from './component';
import { fitMixture, type Mixture } from './gaussian-mixture';

/** Starts of the clustering; those that end alike are followed once. */
const STARTS = 20;
/** Starts are compared after this many steps on this many rows; the best few go to the end. */
const FIRST_STEPS = 15;
const FIRST_ROWS = 800;
const FINALISTS = 2;
/** A third group is fitted for the record only. */
const STARTS_BEYOND_TWO = 8;
const FINALISTS_BEYOND_TWO = 1;
/** Values are cut here before clustering, so that a few odd tracks don't take a group for themselves. */
const START_REACH = 4;
/** The mixture of a very large recording is fitted to this many tracks; its errors are about 2 % then. */
export const FIT_ROWS_MAX = 2000;

/**
 * The best mixture of k groups: k-means++ from 20 seeds for first guesses, then
 * expectation-maximisation. Null where no start kept k groups alive.
 *
 * @param data standardised values.
 */
export function fitGroups(data: MixtureData, k: number, seed: number): Mixture | null {
  const rows = fitRows(data, seed);
  if (k === 1) return fitMixture(rows, new Float64Array(rows.n).fill(1), 1);
  const few = sample(rows, FIRST_ROWS, mixSeed(seed, 2));
  const points = (from: MixtureData) =>
    Array.from({ length: from.n }, (_, i) =>
      Array.from(from.value.subarray(i * from.dims, (i + 1) * from.dims), (v) =>
        Math.max(-START_REACH, Math.min(START_REACH, v)),
      ),
    );
  const fewPoints = points(few);
  const allPoints = rows === few ? fewPoints : points(rows);

  const begun: { lnLikelihood: number; centres: number[][] }[] = [];
  const seen = new Set<string>();
  for (let s = 0; s < (k === 2 ? STARTS : STARTS_BEYOND_TWO); s++) {
    const { centroids, clusters } = kmeans(fewPoints, k, {
      seed: mixSeed(seed, 100 + s) >>> 0,
      initialization: 'kmeans++',
    });
    const signature = sameUpToNames(clusters);
    if (seen.has(signature)) continue;
    seen.add(signature);
    const fit = fitMixture(few, hardStart(fewPoints, centroids), k, {
      iterationsMax: FIRST_STEPS,
      relativeChange: 1e-6,
    });
    if (fit) begun.push({ lnLikelihood: fit.lnLikelihood, centres: centroids });
  }
  begun.sort((a, b) => b.lnLikelihood - a.lnLikelihood);
  let best: Mixture | null = null;
  for (const { centres } of begun.slice(0, k === 2 ? FINALISTS : FINALISTS_BEYOND_TWO)) {
    const fit = fitMixture(rows, hardStart(allPoints, centres), k);
    if (fit && (!best || fit.lnLikelihood > best.lnLikelihood)) best = fit;
  }
  return best;
}

/** The rows that a mixture is fitted to. */
export const fitRows = (data: MixtureData, seed: number): MixtureData =>
  sample(data, FIT_ROWS_MAX, mixSeed(seed, 1));

/** Responsibilities of 1 for the nearest centre. */
function hardStart(points: number[][], centres: number[][]): Float64Array {
  const k = centres.length;
  const start = new Float64Array(points.length * k);
  points.forEach((point, i) => {
    let nearest = 0;
    let least = Infinity;
    centres.forEach((centre, j) => {
      let d2 = 0;
      for (let d = 0; d < point.length; d++) d2 += (point[d] - centre[d]) ** 2;
      if (d2 < least) {
        least = d2;
        nearest = j;
      }
    });
    start[i * k + nearest] = 1;
  });
  return start;
}

/** The same text for clusterings that differ in their numbering only. */
function sameUpToNames(clusters: number[]): string {
  const names = new Map<number, number>();
  return clusters
    .map((cluster) => {
      if (!names.has(cluster)) names.set(cluster, names.size);
      return names.get(cluster);
    })
    .join('');
}

/** All rows, or a random part of them in their order. */
function sample(data: MixtureData, most: number, seed: number): MixtureData {
  if (data.n <= most) return data;
  const random = createRandom(seed);
  const rows = Uint32Array.from({ length: data.n }, (_, i) => i);
  for (let i = 0; i < most; i++) {
    const j = i + random.integer(data.n - i);
    [rows[i], rows[j]] = [rows[j], rows[i]];
  }
  const chosen = rows.slice(0, most).sort();
  const { dims } = data;
  const pick = (from: Float64Array, width: number) => {
    const to = new Float64Array(most * width);
    chosen.forEach((row, i) => to.set(from.subarray(row * width, (row + 1) * width), i * width));
    return to;
  };
  return {
    n: most,
    dims,
    value: pick(data.value, dims),
    variance: pick(data.variance, dims),
    coordinate: pick(data.coordinate, 1),
  };
}
