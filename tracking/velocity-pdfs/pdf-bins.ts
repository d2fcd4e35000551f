import type { SampleSpread } from './sample-spread';

/** Bins are equal to this many robust widths around the median and then grow, so that tails fill them. */
const CORE_WIDTHS = 4;
const GROWTH = 1.2;
const BINS_MAX = 400;

/**
 * Bin edges for samples of one velocity component, m/s: Freedman & Diaconis (1981) widths in the
 * core, but never narrower than the localization noise, growing by a fifth per bin in the tails.
 * Edges are multiples of the core width there, and every sample lies in a bin.
 *
 * @param spread of at least one sample.
 * @param noiseMS standard deviation that localization alone gives; 0 or NaN where unknown.
 */
export function pdfEdges(
  { samples, least, lowerQuartile, median, upperQuartile, most }: SampleSpread,
  noiseMS: number,
): number[] {
  const quartiles = upperQuartile - lowerQuartile;
  const range = most - least;
  const byRule = (2 * quartiles) / Math.cbrt(samples);
  const wanted = Math.max(byRule, noiseMS > 0 ? noiseMS : 0, range / BINS_MAX);
  const width = wanted > 0 ? wanted : Math.max(Math.abs(least), 1e-6) / 10;
  const middle = width * Math.round(median / width);
  const coreBins = Math.max(2, Math.ceil((CORE_WIDTHS * (quartiles / 1.349)) / width));
  const outward = (reach: number): number[] => {
    const edges: number[] = [];
    let step = width;
    for (let at = 0; at <= reach;) {
      if (edges.length >= coreBins) step *= GROWTH;
      at = edges.length < coreBins ? (edges.length + 1) * width : at + step;
      edges.push(at);
    }
    return edges;
  };
  // The upper edge of a bin belongs to the next, so the last bin must end beyond the largest value.
  const above = outward(Math.max(0, most - middle)).map((at) => middle + at);
  const below = outward(Math.max(0, middle - least)).map((at) => middle - at);
  // Adding 0 turns a negative zero, which JSON would not keep, into a plain one.
  return [...below.reverse(), middle, ...above].map((edge) => edge + 0);
}

/** Bin of a value for `edges` ascending; edges[bin] <= value < edges[bin + 1]. */
export function binOf(edges: readonly number[], value: number): number {
  let low = 0;
  let high = edges.length - 2;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (edges[middle] <= value) low = middle;
    else high = middle - 1;
  }
  return low;
}
