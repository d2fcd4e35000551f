import { averagedProbabilities } from './averaged-probabilities';
import { meanAt, type Component, type MixtureData } from './component';
import type { FeatureTable, Standardised } from './feature-table';
import { fitGroups } from './fit-groups';
import { mixtureParameters, responsibilities, type Mixture } from './gaussian-mixture';
import { FEATURES } from './track-features';

/** Two groups must better the criterion by this much (Kass & Raftery 1995: very strong). */
const BIC_GAIN_MIN = 10;
/** And lie this many widths apart in velocity or in transverse motion (Ashman, Bird & Zepf 1994). */
const ASHMAN_D_MIN = 2;
/** And the smaller must be more than a few odd tracks. */
const SMALLER_WEIGHT_MIN = 0.03;
const SMALLER_TRACKS_MIN = 3;
/** Fewer rows than twice the parameters of two groups can't tell one from two. */
const ROWS_MIN = 40;

/** One group of tracks, in the units of the features. */
export interface GroupMeans {
  weight: number;
  /** Mean velocity along the flow over its members, m/s, and their standard deviation. */
  alongMS: number;
  alongSdMS: number;
  /** Mean of ln transverse r.m.s. velocity (m/s) and standard deviation. */
  lnTransverse: number;
  lnTransverseSd: number;
}

export interface ChosenGroups {
  /** BIC for 1, 2 and 3 groups; null where the fit did not work. */
  bic: (number | null)[];
  ashmanD: number | null;
  groups: GroupMeans[];
  /** All tracks as one group; null where they could not be described so. */
  single: GroupMeans | null;
  /** Rows of as many probabilities as groups, the groups' own uncertainty allowed for. */
  probability: Float64Array;
  /** The two components in the order of `groups`; null where there is one group or none. */
  two: readonly [Component, Component] | null;
}

/** Schwarz's Bayesian information criterion: parameters * ln n - 2 ln L. */
export function bayesianInformation(parameters: number, n: number, lnLikelihood: number): number {
  return parameters * Math.log(n) - 2 * lnLikelihood;
}

/** Ashman's distance of two groups: sqrt 2 |mu1 - mu2| / sqrt(s1^2 + s2^2). */
export function ashmanDistance(mean1: number, mean2: number, sd1: number, sd2: number): number {
  return (Math.SQRT2 * Math.abs(mean1 - mean2)) / Math.hypot(sd1, sd2);
}

/**
 * One group of tracks or two: two only if the criterion says so clearly, they lie apart and the
 * smaller one counts. A third group is fitted for the record but never named.
 */
export function chooseGroups(table: FeatureTable, scaled: Standardised, seed: number): ChosenGroups {
  const data: MixtureData = {
    n: table.n,
    dims: FEATURES,
    value: scaled.value,
    variance: scaled.variance,
    coordinate: table.across,
  };
  const bicOf = (k: number, lnLikelihood: number) =>
    bayesianInformation(mixtureParameters(k, FEATURES), table.n, lnLikelihood);
  const fits: (Mixture | null)[] = [fitGroups(data, 1, seed), null, null];
  const full: (ReturnType<typeof responsibilities> | null)[] = [null, null, null];
  const bic: (number | null)[] = [null, null, null];
  for (let k = 1; k <= 3; k++) {
    // A third group is worth a look only where a second one pays.
    if (k > 1 && table.n < ROWS_MIN) break;
    if (k === 3 && !((bic[1] ?? Infinity) < (bic[0] ?? -Infinity))) break;
    const fit = (fits[k - 1] ??= fitGroups(data, k, seed));
    if (!fit) continue;
    const at = responsibilities(data, fit.components);
    if (!Number.isFinite(at.lnLikelihood)) continue;
    full[k - 1] = at;
    bic[k - 1] = bicOf(k, at.lnLikelihood);
  }
  const one = bic[0];
  const two = bic[1];
  const all = new Float64Array(table.n).fill(1);
  const single = fits[0] ? groupMeans(table, scaled, fits[0], all)[0] : null;
  let ashmanD: number | null = null;
  if (one !== null && two !== null && fits[1] && full[1]) {
    const groups = groupMeans(table, scaled, fits[1], full[1].responsibilities);
    const [a, b] = groups;
    ashmanD = Math.max(
      ashmanDistance(a.alongMS, b.alongMS, a.alongSdMS, b.alongSdMS),
      ashmanDistance(a.lnTransverse, b.lnTransverse, a.lnTransverseSd, b.lnTransverseSd),
    );
    const smaller = Math.min(a.weight, b.weight);
    const counts = smaller > SMALLER_WEIGHT_MIN && smaller * table.n > SMALLER_TRACKS_MIN;
    if (one - two > BIC_GAIN_MIN && ashmanD > ASHMAN_D_MIN && counts) {
      const [first, second] = fits[1].components;
      const probability = averagedProbabilities(data, fits[1].components, seed);
      return { bic, ashmanD, groups, single, probability, two: [first, second] };
    }
  }
  return asOneGroup({ bic, ashmanD, single }, table.n);
}

/** The same with all tracks in one group, whatever else was found. */
export function asOneGroup(
  { bic, ashmanD, single }: Pick<ChosenGroups, 'bic' | 'ashmanD' | 'single'>,
  tracks: number,
): ChosenGroups {
  const probability = new Float64Array(tracks).fill(1);
  return { bic, ashmanD, groups: single ? [single] : [], single, probability, two: null };
}

function groupMeans(table: FeatureTable, scaled: Standardised, fit: Mixture, q: Float64Array): GroupMeans[] {
  const k = fit.components.length;
  const mean = new Float64Array(FEATURES);
  return fit.components.map((component, j) => {
    let total = 0;
    let along = 0;
    const noise = [0, 0];
    for (let i = 0; i < table.n; i++) {
      const w = q[i * k + j];
      total += w;
      meanAt(component, table.across[i], FEATURES, mean);
      along += w * mean[0];
      noise[0] += w * scaled.variance[i * FEATURES];
      noise[1] += w * scaled.variance[i * FEATURES + 1];
    }
    // Widths as they are seen, measurement errors included: that is what keeps two groups apart.
    const sd = (d: number) =>
      scaled.scale[d] * Math.sqrt(component.covariance[d * FEATURES + d] + noise[d] / total);
    return {
      weight: total / table.n,
      alongMS: scaled.centre[0] + (scaled.scale[0] * along) / total,
      alongSdMS: sd(0),
      lnTransverse: scaled.centre[1] + scaled.scale[1] * mean[1],
      lnTransverseSd: sd(1),
    };
  });
}
