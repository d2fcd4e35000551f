import { chiSquareTail } from '../estimates/random-effects';
import { chooseGroups } from '../populations/choose-groups';
import { standardise, type FeatureTable } from '../populations/feature-table';
import { findPopulations } from '../populations/populations';
import { FEATURES } from '../populations/track-features';
import { wilsonInterval } from '../populations/wilson';
import { createRandom, mixSeed, type Random } from '../random';
import { tangleScene } from '../simulate/tangle-scene';
import { trueTracks } from '../simulate/true-tracks';

/** Features of tracks drawn from known densities: two Gaussians, or one. */
export interface PopulationCase {
  tracks: number;
  /** Share of trapped tracks; 0 for free ones alone. */
  trappedShare: number;
  /** Distance of the groups in the velocity along the flow, in standard deviations; half of it across. */
  separation: number;
  /** Depth of the parabola of the velocity across the channel, in standard deviations. */
  parabola: number;
}

/** Spread of the features within a group, and of their measurement errors. */
const MEASURED_SD = 0.2;
const TRAPPED_FROM = 0.9;
const BINS = 10;
/** Where nearly all are expected to be of one kind a count is no Gaussian. */
const VARIANCE_LEAST = 1;

interface Drawn {
  table: FeatureTable;
  trapped: Uint8Array;
  /** Probability by the densities that the features were drawn from. */
  known: Float64Array;
}

function draw({ tracks, trappedShare, separation, parabola }: PopulationCase, random: Random): Drawn {
  const value = new Float64Array(tracks * FEATURES);
  const variance = new Float64Array(tracks * FEATURES).fill(MEASURED_SD ** 2);
  const across = Float64Array.from({ length: tracks }, () => 2 * random.uniform() - 1);
  const trapped = new Uint8Array(tracks);
  const known = new Float64Array(tracks);
  const apart = [-separation, separation / 2, 0, 0];
  const total2 = 1 + MEASURED_SD ** 2;
  for (let i = 0; i < tracks; i++) {
    trapped[i] = random.uniform() < trappedShare ? 1 : 0;
    const bent = parabola * (1 - across[i] ** 2);
    let lnOdds = Math.log(trappedShare / (1 - trappedShare));
    for (let d = 0; d < FEATURES; d++) {
      // Free tracers follow the profile; lines move together.
      const free = d === 0 ? bent : 0;
      const mean = trapped[i] ? apart[d] : free;
      const v = mean + random.normal() + MEASURED_SD * random.normal();
      value[i * FEATURES + d] = v;
      lnOdds += ((v - free) ** 2 - (v - apart[d]) ** 2) / (2 * total2);
    }
    known[i] = 1 / (1 + Math.exp(-lnOdds));
  }
  const track = Uint32Array.from({ length: tracks }, (_, i) => i);
  return { table: { n: tracks, track, value, variance, across }, trapped, known };
}

export interface PopulationFigures extends PopulationCase {
  trials: number;
  /** Trials in which two groups were told apart. */
  split: number;
  /** Over the decided tracks of those: mean of the shares of both kinds that are named rightly. */
  balancedAccuracy: number;
  /** The same of the rule that knows the densities, over the tracks that it decides. */
  bestAccuracy: number;
  undecided: number;
  bestUndecided: number;
  /** Per tenth of the stated probability: its mean, the share that is trapped with Wilson's interval, tracks. */
  reliability: { stated: number; share: number; low: number; high: number; tracks: number }[];
  /** Chance of a curve as far off as this one if probabilities are what they say. */
  reliabilityChance: number;
}

/** How well tracks drawn from known densities are told apart, beside the rule that knows the densities. */
export function studyPopulations(one: PopulationCase, seeds: readonly number[]): PopulationFigures {
  const [mine, best] = [new Tally(), new Tally()];
  const bins = Array.from({ length: BINS }, () => ({ tracks: 0, trapped: 0, stated: 0, variance: 0 }));
  let split = 0;
  for (const seed of seeds) {
    const { table, trapped, known } = draw(one, createRandom(mixSeed(seed, 71)));
    const { groups, probability } = chooseGroups(table, standardise(table), seed);
    if (groups.length !== 2) continue;
    split++;
    // The trapped group is the one that moves against the flow.
    const of = groups[0].alongMS < groups[1].alongMS ? 0 : 1;
    for (let i = 0; i < table.n; i++) {
      const p = probability[2 * i + of];
      mine.add(p, trapped[i] === 1);
      best.add(known[i], trapped[i] === 1);
      const bin = bins[Math.min(BINS - 1, Math.floor(p * BINS))];
      bin.tracks++;
      bin.trapped += trapped[i];
      bin.stated += p;
      bin.variance += p * (1 - p);
    }
  }
  return {
    ...one,
    trials: seeds.length,
    split,
    balancedAccuracy: mine.balanced(),
    bestAccuracy: best.balanced(),
    undecided: mine.undecided(),
    bestUndecided: best.undecided(),
    reliability: bins
      .filter(({ tracks }) => tracks > 0)
      .map(({ tracks, trapped, stated }) => ({
        stated: stated / tracks,
        share: trapped / tracks,
        ...wilsonInterval(trapped, tracks),
        tracks,
      })),
    reliabilityChance: curveChance(bins),
  };
}

/**
 * Whether shares lie in their joint 95 % band about what was stated: chi-square of the tenths that hold
 * enough of both kinds to be Gaussian (Hosmer & Lemeshow 1980, probabilities not fitted to these answers).
 */
function curveChance(bins: readonly { trapped: number; stated: number; variance: number }[]): number {
  const told = bins.filter(({ variance }) => variance >= VARIANCE_LEAST);
  const chi2 = told.reduce((sum, b) => sum + (b.trapped - b.stated) ** 2 / b.variance, 0);
  return told.length > 0 ? chiSquareTail(chi2, told.length) : 1;
}

/** Right and wrong names of both kinds. */
class Tally {
  private readonly named = [0, 0];
  private readonly right = [0, 0];
  private all = 0;

  add(pTrapped: number, trapped: boolean): void {
    this.all++;
    const kind = trapped ? 1 : 0;
    const name = pTrapped >= TRAPPED_FROM ? 1 : pTrapped <= 1 - TRAPPED_FROM ? 0 : null;
    if (name === null) return;
    this.named[kind]++;
    if (name === kind) this.right[kind]++;
  }

  balanced(): number {
    return (this.right[0] / this.named[0] + this.right[1] / this.named[1]) / 2;
  }

  undecided(): number {
    return 1 - (this.named[0] + this.named[1]) / this.all;
  }
}

/** At most 0.02 below the rule that knows the densities, at most 10 % undecided, probabilities that are what they say. */
export const keepsPopulations = (figures: PopulationFigures): boolean =>
  figures.split === figures.trials &&
  figures.reliabilityChance >= 0.05 &&
  figures.balancedAccuracy >= figures.bestAccuracy - 0.02 &&
  (figures.separation < 4 || figures.balancedAccuracy >= 0.95) &&
  figures.undecided <= Math.max(0.1, figures.bestUndecided + 0.02);

/** Trials of free tracks alone in which a second population was invented: at most 1 of 40. */
export function inventedPopulations(seeds: readonly number[], parabola: number): number {
  const cases: PopulationCase = {
    tracks: parabola > 0 ? 375 : 200,
    trappedShare: 0,
    separation: 0,
    parabola,
  };
  return seeds.filter((seed) => {
    const { table } = draw(cases, createRandom(mixSeed(seed, 72)));
    return chooseGroups(table, standardise(table), seed).groups.length > 1;
  }).length;
}

/** Simulated decays of a tangle without free tracers and without heat: how many are named trapped. */
export function namedTrapped(seeds: readonly number[]): number {
  return seeds.filter((seed) => {
    const scene = tangleScene({
      widthPx: 320,
      heightPx: 320,
      frames: 60,
      pixelSizeM: 1e-5,
      frameIntervalS: 0.005,
      sheetThicknessM: 2e-4,
      lineDensityM2: 8e6,
      beadsPerMetre: 5000,
      freeTracersPerFrame: 0,
      vnMPerS: 0,
      tangleVelocityMPerS: 0,
      burstsPerLineS: 1,
      seed,
    });
    const { tracks } = trueTracks(scene, { sigmaPx: 0.15, seed, shortestTrackFrames: 3 });
    const conditions = {
      pixelSize_m: 1e-5,
      frameInterval_s: 0.005,
      temperature_K: 1.65,
      heatFlux_W_m2: 0,
      flowDirection: null,
    };
    const image = { width: 320, height: 320 };
    const { summary } = findPopulations(tracks, image, conditions, { trappedFrom: TRAPPED_FROM, seed });
    return summary.counts.trapped > 0 && summary.counts.free === 0;
  }).length;
}
