import type { TrackPacks } from '../resampling/packs';
import { exponentOf, noisyLaw, shareBeyond } from './broadened-law';
import type { SizeNoise } from './power-law-tail';

/** What is resampled: the sizes of a tail, whose they are, and the tails that were tried. */
export interface ResampledTail {
  /** Descending, m/s, and the track of each. */
  sizeMS: Float64Array;
  track: Uint32Array;
  /** Of `triedTails`. */
  tried: readonly number[];
  /** Samples of the tail that was chosen; tails like it are looked at first, which spares most of the others. */
  chosen: number;
  noise: SizeNoise;
}

/** Distances of data and law are looked at where a tail has this many samples at least, and then every 8 %. */
const LOOKED_AT_FROM = 3;
const LOOKED_AT_RATIO = 1.08;

/**
 * Exponents of as many draws of whole tracks with replacement, each with a beginning of its own, chosen as that of the
 * data was: where a tail begins is as uncertain as what it holds (Clauset, Shalizi & Newman 2009, section 3.3, for
 * resampling; whole tracks, since samples of one track depend on each other).
 *
 * @returns fewer exponents than draws where a draw has no tail.
 */
export function resampledExponents(
  { sizeMS, track, tried, chosen, noise }: ResampledTail,
  { packs, pack, draws, weights }: TrackPacks,
): Float64Array {
  const ends = lookedAt(tried);
  const steps = ends.length;
  // Samples and sums of logarithms of each pack between one place and the next.
  const counts = new Float64Array(packs * steps);
  const lnSums = new Float64Array(packs * steps);
  for (let t = 0, k = 0; t < steps; t++) {
    for (; k < ends[t]; k++) {
      counts[pack[track[k]] * steps + t]++;
      lnSums[pack[track[k]] * steps + t] += Math.log(sizeMS[k]);
    }
  }
  const isTried = new Set(tried);
  const far = (t: number) => Math.abs(Math.log(ends[t] / chosen));
  const law: Beginnings = {
    lnFrom: Float64Array.from(ends, (samples) => Math.log(sizeMS[samples - 1])),
    perSquare: Float64Array.from(ends, (samples) => sizeMS[samples - 1] ** -2),
    tried: ends.flatMap((samples, t) => (isTried.has(samples) ? [t] : [])).sort((a, b) => far(a) - far(b)),
    noise,
  };
  const exponents = new Float64Array(draws);
  let found = 0;
  const count = new Float64Array(steps);
  const lnSum = new Float64Array(steps);
  for (let d = 0; d < draws; d++) {
    count.fill(0);
    lnSum.fill(0);
    for (let p = 0; p < packs; p++) {
      const weight = weights[d * packs + p];
      if (weight === 0) continue;
      for (let t = 0, row = p * steps; t < steps; t++, row++) {
        count[t] += weight * counts[row];
        lnSum[t] += weight * lnSums[row];
      }
    }
    for (let t = 1; t < steps; t++) {
      count[t] += count[t - 1];
      lnSum[t] += lnSum[t - 1];
    }
    const alpha = bestExponent(count, lnSum, law);
    if (Number.isFinite(alpha)) exponents[found++] = alpha;
  }
  return exponents.subarray(0, found);
}

/** Numbers of samples at which data and law are compared, ascending, those of the tails tried among them. */
function lookedAt(tried: readonly number[]): number[] {
  const most = tried[tried.length - 1] ?? 0;
  const all = new Set(tried);
  for (let samples = LOOKED_AT_FROM; samples < most; samples *= LOOKED_AT_RATIO) all.add(Math.round(samples));
  return [...all].sort((a, b) => a - b);
}

interface Beginnings {
  /** ln of the size at each place that is looked at, and the size to the power of -2. */
  lnFrom: Float64Array;
  perSquare: Float64Array;
  /** Places at which a tail may begin, most promising first. */
  tried: readonly number[];
  noise: SizeNoise;
}

function bestExponent(
  count: Float64Array,
  lnSum: Float64Array,
  { lnFrom, perSquare, tried, noise: { noiseMS, kind } }: Beginnings,
): number {
  let best = Infinity;
  let least = Infinity;
  for (const t of tried) {
    const noiseShare = noiseMS / Math.exp(lnFrom[t]);
    const alpha = exponentOf(lnSum[t] / count[t] - lnFrom[t], noiseShare, kind);
    if (!Number.isFinite(alpha)) continue;
    const law = noisyLaw(alpha, noiseShare, kind);
    const all = count[t];
    let distance = 0;
    for (let j = t; j >= 0 && distance < least; j--) {
      const power = Math.exp((1 - alpha) * (lnFrom[j] - lnFrom[t]));
      const off = Math.abs(shareBeyond(law, perSquare[j] / perSquare[t], power) - count[j] / all);
      if (off > distance) distance = off;
    }
    if (distance < least) {
      least = distance;
      best = alpha;
    }
  }
  return best;
}
