import { createRandom, mixSeed } from '../random';
import { fitRows } from './fit-groups';
import type { Component, MixtureData } from './component';
import { refitMixture, responsibilities } from './gaussian-mixture';

/** Mixtures that are averaged over: the rest of chance is then a fifth of what the average takes away. */
const DRAWS = 20;
/** Steps from the mixture of all tracks to that of a draw, which lies near. */
const STEPS = 10;

/**
 * Probabilities of groups that allow for the mixture itself being uncertain: the mean over mixtures that are fitted to
 * tracks drawn with replacement (Breiman, Machine Learning 24, 123, 1996; a stand-in for the mean over the posterior of
 * the mixture, Rubin, Ann. Stat. 9, 130, 1981). Those of the best mixture alone are too sure of themselves, the more
 * so the fewer the tracks and the nearer the groups.
 *
 * @param best the mixture of all tracks.
 * @returns rows of as many probabilities as components.
 */
export function averagedProbabilities(
  data: MixtureData,
  best: readonly Component[],
  seed: number,
): Float64Array {
  const rows = fitRows(data, seed);
  const random = createRandom(mixSeed(seed, 3));
  const sum = new Float64Array(data.n * best.length);
  let averaged = 0;
  for (let d = 0; d < DRAWS; d++) {
    const drawn = new Uint16Array(rows.n);
    for (let i = 0; i < rows.n; i++) drawn[random.integer(rows.n)]++;
    const components = refitMixture(rows, best, drawn, STEPS);
    if (!components) continue;
    const { responsibilities: q, lnLikelihood } = responsibilities(data, components);
    if (!Number.isFinite(lnLikelihood)) continue;
    averaged++;
    for (let i = 0; i < sum.length; i++) sum[i] += q[i];
  }
  if (averaged === 0) return responsibilities(data, [...best]).responsibilities;
  return sum.map((value) => value / averaged);
}
