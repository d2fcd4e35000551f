import { createRandom, mixSeed } from '../random';
import { KAPPA_M2_S } from '../units';
import { BLOCKS, blockOfTrack } from './image-blocks';
import type { EstimateContext } from './context';
import { lnSpread, notUsable, type DensityResult } from './interval';
import { fitRelativeDecay } from './relative-decay';

/** Windows that the recording is cut into; the number of tracers is counted in each. */
const WINDOWS = 12;
/** A decay that is not this many standard errors from none gives no density. */
const SIGNIFICANT = 3;
/** Loss over the whole recording below which nothing decays to speak of. */
const LOSS_LEAST = 0.02;
/**
 * chi_2 of dL/dt = -chi_2 kappa / (2 pi) L^2 at two temperatures, between which it is interpolated (values from
 * memory, unverified), and the standard error of its logarithm.
 */
const CHI2 = { coldK: 1.3, cold: 0.3, warmK: 2.1, warm: 1.5 } as const;
const LN_CHI2_ERROR = 0.5;
const DRAWS_LEAST = 20;

/** chi_2 at a temperature; NaN outside 1.3 to 2.1 K. */
export function chi2At(temperatureK: number): number {
  if (!(temperatureK >= CHI2.coldK && temperatureK <= CHI2.warmK)) return Number.NaN;
  const share = (temperatureK - CHI2.coldK) / (CHI2.warmK - CHI2.coldK);
  return CHI2.cold * (CHI2.warm / CHI2.cold) ** share;
}

/**
 * L from how quickly a tangle without drive thins out: 1 / L grows by chi_2 kappa / (2 pi) per time (Vinen
 * 1957), so the relative rate at which trapped tracers become fewer gives L itself, whatever share of the
 * lines carries tracers. The value is that of the middle of the recording.
 */
export function decayEstimate(
  context: Pick<EstimateContext, 'tracks' | 'pool' | 'image' | 'conditions' | 'recipe' | 'groups'>,
): DensityResult {
  const method = 'decay';
  const { tracks, pool, image, conditions, recipe, groups } = context;
  if (conditions.heatFlux_W_m2) {
    return notUsable(method, 'The flow is driven, so the tangle doesn’t decay freely.');
  }
  const temperatureK = conditions.temperature_K;
  if (temperatureK == null) return notUsable(method, 'The temperature is not given, and χ₂ depends on it.');
  const chi2 = chi2At(temperatureK);
  if (Number.isNaN(chi2)) return notUsable(method, 'No χ₂ is on file at this temperature (1.3 to 2.1 K).');

  const windows = Math.min(WINDOWS, image.frames);
  const chosen = Array.from({ length: tracks.count }, (_, i) => i).filter((i) => pool.chosen[i] === 1);
  const durationS = image.frames * conditions.frameInterval_s;
  const byLine = countsBy((i) => groups.line[i], groups.lines);
  const fit = fitRelativeDecay(totals(byLine, null), durationS);
  const inputs = {
    chi2: { value: chi2, unit: '' },
    relativeDecayRate: { value: fit.ratePerS, unit: '1/s' },
    duration: { value: durationS, unit: 's' },
  };
  // Tracers of a line go together; so do those of a line that leaves the sheet and comes back elsewhere in it.
  const draws = [byLine, countsBy((i) => blockOfTrack(tracks, i, image), BLOCKS)].map((counts, of) =>
    ratesOfDraws(counts, of),
  );
  const errors = draws.map(spreadOf);
  const worse = errors[1] > errors[0] ? 1 : 0;
  const [rates, error] = [draws[worse], errors[worse]];
  const told = fit.ratePerS > SIGNIFICANT * error && fit.ratePerS * durationS > LOSS_LEAST;
  if (rates.length < DRAWS_LEAST || !told) {
    return notUsable(method, 'The number of trapped tracers doesn’t fall by more than chance.', inputs);
  }
  const perDensity = (chi2 * KAPPA_M2_S) / (2 * Math.PI);
  return {
    method,
    valueM2: fit.ratePerS / perDensity,
    statistical: lnSpread(rates),
    systematic: LN_CHI2_ERROR,
    inputs,
    note: 'Rate at which trapped tracers become fewer, taken for the free decay of the tangle with a χ₂ from memory, unverified; tracers that leave the sheet or their lines count as decay too.',
  };

  /** Points in every window, by cluster of tracks that know of each other. */
  function countsBy(cluster: (track: number) => number, clusters: number): Float64Array[] {
    const counts = Array.from({ length: clusters }, () => new Float64Array(windows));
    for (const i of chosen) {
      const row = counts[cluster(i)];
      for (let p = tracks.start[i]; p < tracks.start[i + 1]; p++)
        row[Math.floor((tracks.frame[p] * windows) / image.frames)]++;
    }
    return counts.filter((row) => row.some((n) => n > 0));
  }

  /** Rates of clusters drawn with replacement, each as often as a Poisson variable of mean 1 says. */
  function ratesOfDraws(counts: readonly Float64Array[], stream: number): number[] {
    const random = createRandom(mixSeed(recipe.seed, 45 + 1000 * stream));
    return Array.from({ length: recipe.bootstrapDraws }, () => {
      const times = Int32Array.from({ length: counts.length }, () => random.poisson(1));
      return fitRelativeDecay(totals(counts, times), durationS).ratePerS;
    }).filter(Number.isFinite);
  }
}

function spreadOf(values: readonly number[]): number {
  const mean = values.reduce((a, b) => a + b, 0) / values.length;
  return Math.sqrt(values.reduce((sum, v) => sum + (v - mean) ** 2, 0) / values.length);
}

function totals(counts: readonly Float64Array[], times: Int32Array | null): Float64Array {
  const sum = new Float64Array(counts[0]?.length ?? 0);
  counts.forEach((row, i) => {
    const weight = times ? times[i] : 1;
    if (weight > 0) for (let w = 0; w < row.length; w++) sum[w] += weight * row[w];
  });
  return sum;
}
