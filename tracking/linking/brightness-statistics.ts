import { SPOT_ELONGATED, SPOT_OVERLAP, type Spots } from '../types';
import { MEDIAN_OF_SQUARE, medianOf } from './medians';

/** What the brightness of a spot tells of whose it is; all of ln brightness. */
export interface BrightnessStatistics {
  /** Mean and variance between tracers. Variance 0: brightness tells nothing and is left alone. */
  mean: number;
  variance: number;
  /** Correlation of a tracer's own brightness with itself one frame later, 0 to 1. */
  persistence: number;
  /** Factor between the variance that a spot's counts let expect and the true one; of crowded spots. */
  errorScale: number;
  crowdedErrorScale: number;
}

export const BRIGHTNESS_UNTOLD: BrightnessStatistics = {
  mean: 0,
  variance: 0,
  persistence: 0,
  errorScale: 1,
  crowdedErrorScale: 1,
};

/** Frames over which the slow change of brightness is measured. */
const LAG_FRAMES = 8;
const SAMPLES_LEAST = 30;
const SAMPLES_MOST = 10_000;
/**
 * Tracers must differ by so much of what spots of one tracer differ by, or the cue is left alone;
 * and by more than three standard errors (a variance from n squares by their median: 2.4 / sqrt n).
 */
const CONTRAST_LEAST = 0.15;
const CONTRAST_ERROR = 3 * 2.4;
/** No brightness is known better than this (relative): pixels differ, the sheet ripples. */
const ERROR_LEAST = 0.02;
const CROWDED = SPOT_OVERLAP | SPOT_ELONGATED;

/**
 * How brightness persists, from the links of a first pass, by medians so that wrong links hardly
 * count. The scatter of all spots is that between tracers plus that of one tracer's spots, which
 * the differences along links show; what is left over is what tells tracers apart.
 *
 * @param before for each spot the one before it in its track, or -1.
 */
export function measureBrightness(spots: Spots, before: Int32Array): BrightnessStatistics {
  const step = Math.max(1, Math.floor(spots.count / SAMPLES_MOST));
  const room = Math.ceil(spots.count / step);
  const values = new Float64Array(room);
  const change = new Float64Array(room);
  const slowChange = new Float64Array(room);
  const scale = new Float64Array(room);
  const crowdedScale = new Float64Array(room);
  let n = 0;
  let changes = 0;
  let slowChanges = 0;
  let scales = 0;
  let crowdedScales = 0;
  for (let s = 0; s < spots.count; s += step) {
    const value = lnBrightness(spots, s);
    values[n++] = value;
    const b = before[s];
    if (b < 0 || spots.frame[s] - spots.frame[b] !== 1) continue;
    const squared = (value - lnBrightness(spots, b)) ** 2;
    const expected = countedVariance(spots, s) + countedVariance(spots, b);
    if (((spots.flags[s] | spots.flags[b]) & CROWDED) !== 0) {
      crowdedScale[crowdedScales++] = squared / expected;
      continue;
    }
    change[changes++] = squared;
    scale[scales++] = squared / expected;
    let early = b;
    for (let k = 1; k < LAG_FRAMES && early >= 0; k++) early = before[early];
    if (early < 0 || spots.frame[s] - spots.frame[early] !== LAG_FRAMES) continue;
    slowChange[slowChanges++] = (value - lnBrightness(spots, early)) ** 2;
  }
  if (changes < SAMPLES_LEAST) return BRIGHTNESS_UNTOLD;

  const mean = medianOf(values, n);
  for (let i = 0; i < n; i++) values[i] = (values[i] - mean) ** 2;
  const total = medianOf(values, n) / MEDIAN_OF_SQUARE;
  const fast = medianOf(change, changes) / MEDIAN_OF_SQUARE;
  const variance = total - 0.5 * fast;
  const contrastLeast = CONTRAST_LEAST + CONTRAST_ERROR / Math.sqrt(changes);
  if (!(variance > contrastLeast * 0.5 * fast) || variance < ERROR_LEAST * ERROR_LEAST) {
    return BRIGHTNESS_UNTOLD;
  }
  const slow = slowChanges >= SAMPLES_LEAST ? medianOf(slowChange, slowChanges) / MEDIAN_OF_SQUARE : fast;
  const drift = Math.max(0, slow - fast) / (LAG_FRAMES - 1);
  const errorScale = medianOf(scale, scales) / MEDIAN_OF_SQUARE;
  const crowded =
    crowdedScales >= SAMPLES_LEAST
      ? medianOf(crowdedScale, crowdedScales) / MEDIAN_OF_SQUARE
      : 2 * errorScale;
  return {
    mean,
    variance,
    // An autoregressive process of first order loses 2 (1 - persistence) of its variance in a frame.
    persistence: Math.max(0, 1 - drift / (2 * variance)),
    errorScale,
    crowdedErrorScale: Math.max(errorScale, crowded),
  };
}

/** Ln of the brightness of a spot; less than one photoelectron counts as one. */
export function lnBrightness(spots: Spots, s: number): number {
  return Math.log(Math.max(1, spots.brightness[s]));
}

/** Variance of ln brightness (of that spot, not between tracers). */
export function lnBrightnessVariance(spots: Spots, s: number, statistics: BrightnessStatistics): number {
  const scale = (spots.flags[s] & CROWDED) === 0 ? statistics.errorScale : statistics.crowdedErrorScale;
  return scale * countedVariance(spots, s) + ERROR_LEAST * ERROR_LEAST;
}

/** Noise of the background, by the matched filter's response, and shot noise of the spot's own light. */
function countedVariance(spots: Spots, s: number): number {
  const snr = Math.max(1, spots.snr[s]);
  return 1 / (snr * snr) + 1 / Math.max(1, spots.brightness[s]);
}
