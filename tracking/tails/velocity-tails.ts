import { Z95 } from '../normal-tail';
import { createRandom, mixSeed } from '../random';
import { packTracks, type TrackPacks } from '../resampling/packs';
import { ComponentReader, countSamples, someNoise } from '../velocity-pdfs/component-samples';
import type { PdfPopulation, VelocityComponent } from '../velocity-pdf-shape';
import { POPULATIONS, type Conditions, type Recipe, type Tracks } from '../types';
import { unitFlow } from '../velocities';
import { compareDensities, type LikelihoodRatio } from './likelihood-ratio';
import { fitPowerLawTail, triedTails, type SizeNoise } from './power-law-tail';
import { resampledExponents } from './resampled-exponents';
import { fitGaussianTail, fitLogNormalTail, powerLawDensity } from './tail-alternatives';
import { tailSamples, type TailSamples } from './tail-samples';
import { tailError } from './tail-error';

export type TailVerdict =
  'power law' | 'Gaussian' | 'log-normal' | 'the data cannot tell' | 'too few samples';

/** Tail of the sizes of one velocity component of one population at one lag. Plain JSON. */
export interface VelocityTail {
  population: PdfPopulation;
  component: VelocityComponent;
  lagFrames: number;
  lagS: number;
  /** Samples that don't overlap, and how many of them and of how many tracks make the tail. */
  samples: number;
  tailSamples: number;
  tailTracks: number;
  /** Mean distance travelled within the lag, m: tails are expected where it is below the line spacing. */
  meanPathM: number;
  /** Exponent of the density, with a 95 % interval over tracks; null without a tail. */
  exponent: number | null;
  exponentLow: number | null;
  exponentHigh: number | null;
  /** Where the tail begins, and the least size at which noise can't make one, m/s. */
  fromMS: number | null;
  noiseFloorMS: number;
  gaussian: LikelihoodRatio | null;
  logNormal: LikelihoodRatio | null;
  verdict: TailVerdict;
}

/** A tail begins this many noise widths out at least (common practice, no source). */
const NOISE_WIDTHS = 5;
const DOUBT = 0.05;
/** A law that holds over a smaller range of sizes can't be told from others (common practice, no source). */
const RANGE_LEAST = 3;
const NOISE_SAMPLES = 1000;
/** Draws for the error of an exponent, known to 7 % then. */
const DRAWS = 100;

/**
 * Power-law tails of the speed and of the components across and along the flow (x and y without one), for
 * every population and lag, each tested against a Gaussian and a log-normal tail.
 */
export function velocityTails(
  tracks: Tracks,
  population: Uint8Array,
  conditions: Conditions,
  recipe: Pick<Recipe, 'lagsFrames' | 'seed'>,
): VelocityTail[] {
  const direction = unitFlow(conditions);
  const components: VelocityComponent[] = direction ? ['along', 'across', 'speed'] : ['x', 'y', 'speed'];
  const tails: VelocityTail[] = [];
  const packs = packTracks(createRandom(mixSeed(recipe.seed, 22)), tracks.count, DRAWS);
  const readerOf = (lagFrames: number, component: VelocityComponent) =>
    new ComponentReader(tracks, lagFrames, conditions, component, direction ?? [1, 0]);
  for (const lagFrames of recipe.lagsFrames) {
    const speeds = readerOf(lagFrames, 'speed');
    const all = countSamples(speeds, tracks.count);
    if (all === 0) continue;
    const lagS = lagFrames * conditions.frameInterval_s;
    for (const component of components) {
      const reader = readerOf(lagFrames, component);
      const noiseMS = noiseWidth(someNoise(reader, tracks.count, all, NOISE_SAMPLES));
      const floor = NOISE_WIDTHS * noiseMS;
      const noise: SizeNoise = { noiseMS, kind: component === 'speed' ? 'speed' : 'component' };
      [...POPULATIONS, 'all' as const].forEach((name, code) => {
        const takes = (track: number) => name === 'all' || population[track] === code;
        const sizes = tailSamples(reader, tracks.count, lagFrames, takes, component !== 'speed', floor);
        if (sizes.samples === 0) return;
        tails.push({
          population: name,
          component,
          lagFrames,
          lagS,
          samples: sizes.samples,
          meanPathM: meanSpeed(speeds, tracks.count, takes) * lagS,
          noiseFloorMS: floor,
          ...describe(sizes, floor, noise, packs),
        });
      });
    }
  }
  return tails;
}

type Described = Pick<
  VelocityTail,
  | 'tailSamples'
  | 'tailTracks'
  | 'exponent'
  | 'exponentLow'
  | 'exponentHigh'
  | 'fromMS'
  | 'gaussian'
  | 'logNormal'
  | 'verdict'
>;

function describe(sizes: TailSamples, floorMS: number, noise: SizeNoise, packs: TrackPacks): Described {
  const { sizeMS, track } = sizes;
  const tail = fitPowerLawTail(sizeMS, floorMS, sizes.samples, noise);
  if (!tail) {
    return {
      tailSamples: 0,
      tailTracks: 0,
      exponent: null,
      exponentLow: null,
      exponentHigh: null,
      fromMS: null,
      gaussian: null,
      logNormal: null,
      verdict: 'too few samples',
    };
  }
  const { alpha, fromMS, samples } = tail;
  const error = tailError(sizeMS, track, tail);
  const law = powerLawDensity(alpha, fromMS, tail.noiseShare, noise.kind);
  const tried = triedTails(sizeMS, floorMS, sizes.samples);
  const scatter = standardDeviation(
    resampledExponents({ sizeMS, track, tried, chosen: samples, noise }, packs),
  );
  // The beginning given, samples of the tail alone tell this much; few draws may tell less by chance.
  const standardError = Math.max(error.standardError, scatter);
  const gaussian = compareDensities(sizeMS, track, samples, law, fitGaussianTail(sizeMS, samples, fromMS));
  const logNormal = compareDensities(sizeMS, track, samples, law, fitLogNormalTail(sizeMS, samples, fromMS));
  return {
    tailSamples: samples,
    tailTracks: new Set(track.subarray(0, samples)).size,
    exponent: alpha,
    exponentLow: alpha - Z95 * standardError,
    exponentHigh: alpha + Z95 * standardError,
    fromMS,
    gaussian,
    logNormal,
    verdict: judge(sizeMS[0] / tail.fromMS > RANGE_LEAST, error.fits, gaussian, logNormal),
  };
}

function judge(
  wide: boolean,
  fits: boolean,
  gaussian: LikelihoodRatio,
  logNormal: LikelihoodRatio,
): TailVerdict {
  if (gaussian.pEqual < DOUBT && gaussian.lnRatio < 0) return 'Gaussian';
  if (logNormal.pEqual < DOUBT && logNormal.lnRatio < 0) return 'log-normal';
  return wide && fits && gaussian.pEqual < DOUBT ? 'power law' : 'the data cannot tell';
}

function standardDeviation(values: Float64Array): number {
  if (values.length < 2) return 0;
  const mean = values.reduce((sum, v) => sum + v, 0) / values.length;
  return Math.sqrt(values.reduce((sum, v) => sum + (v - mean) ** 2, 0) / (values.length - 1));
}

function noiseWidth(variances: readonly number[]): number {
  let sum = 0;
  for (const variance of variances) sum += variance;
  return variances.length > 0 ? Math.sqrt(sum / variances.length) : 0;
}

function meanSpeed(reader: ComponentReader, tracks: number, takes: (track: number) => boolean): number {
  let sum = 0;
  let count = 0;
  for (let i = 0; i < tracks; i++) {
    if (!takes(i)) continue;
    const n = reader.read(i);
    for (let k = 0; k < n; k++, count++) sum += reader.values[k];
  }
  return sum / count;
}
