import { quantileAmong } from '../quantile';

/** Zero of n samples still allows 3/n at 95 % (rule of three). */
const RULE_OF_THREE = 3;

/**
 * Pointwise 95 % band of the density in bins, from drawing packs of whole tracks with replacement.
 *
 * @param counts packs rows of bins: samples of a pack in a bin.
 * @param weights multiplicities of `packTracks` for as many packs.
 * @returns null where fewer than 2 packs hold samples.
 */
export function bootstrapBand(
  counts: Float64Array,
  packs: number,
  widths: readonly number[],
  weights: Uint16Array,
): { low: number[]; high: number[] } | null {
  const bins = widths.length;
  const filled: number[] = [];
  const totals = new Float64Array(packs);
  for (let p = 0; p < packs; p++) {
    for (let b = 0; b < bins; b++) totals[p] += counts[p * bins + b];
    if (totals[p] > 0) filled.push(p);
  }
  if (filled.length < 2) return null;
  const draws = weights.length / packs;
  const densities = new Float64Array(bins * draws);
  const sum = new Float64Array(bins);
  let kept = 0;
  for (let d = 0; d < draws; d++) {
    sum.fill(0);
    let total = 0;
    for (const p of filled) {
      const weight = weights[d * packs + p];
      if (weight === 0) continue;
      total += weight * totals[p];
      const row = p * bins;
      for (let b = 0; b < bins; b++) sum[b] += weight * counts[row + b];
    }
    if (total === 0) continue;
    for (let b = 0; b < bins; b++) densities[b * draws + kept] = sum[b] / (total * widths[b]);
    kept++;
  }
  const samples = totals.reduce((a, b) => a + b, 0);
  const low: number[] = [];
  const high: number[] = [];
  for (let b = 0; b < bins; b++) {
    const ofBin = densities.subarray(b * draws, b * draws + kept);
    low.push(quantileAmong(ofBin, kept, 0.025));
    const isEmpty = !ofBin.some((density) => density > 0);
    high.push(isEmpty ? RULE_OF_THREE / (samples * widths[b]) : quantileAmong(ofBin, kept, 0.975));
  }
  return { low, high };
}
