import { Z95 } from '../normal-tail';
import { componentNoise, componentOf, lagSamples, type LagSamples } from '../velocity-pdfs/component-samples';
import type { PdfPopulation, VelocityComponent } from '../velocity-pdf-shape';
import { POPULATIONS, type Conditions, type Recipe, type Tracks } from '../types';
import { unitFlow } from '../velocities';
import { compareDensities, type LikelihoodRatio } from './likelihood-ratio';
import { fitPowerLawTail } from './power-law-tail';
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

/**
 * Power-law tails of the speed and of the components across and along the flow (x and y without one), for
 * every population and lag, each tested against a Gaussian and a log-normal tail.
 */
export function velocityTails(
  tracks: Tracks,
  population: Uint8Array,
  conditions: Conditions,
  recipe: Pick<Recipe, 'lagsFrames'>,
): VelocityTail[] {
  const direction = unitFlow(conditions);
  const components: VelocityComponent[] = direction ? ['along', 'across', 'speed'] : ['x', 'y', 'speed'];
  const tails: VelocityTail[] = [];
  for (const lagFrames of recipe.lagsFrames) {
    const samples = lagSamples(tracks, lagFrames, conditions);
    if (samples.vxMS.length === 0) continue;
    const lagS = lagFrames * conditions.frameInterval_s;
    for (const component of components) {
      const values = componentOf(samples, component, direction ?? [1, 0]);
      const floor = NOISE_WIDTHS * noiseWidth(samples, component, direction ?? [1, 0]);
      [...POPULATIONS, 'all' as const].forEach((name, code) => {
        const takes = (track: number) => name === 'all' || population[track] === code;
        const sizes = tailSamples(samples, values, lagFrames, takes, component !== 'speed');
        if (sizes.sizeMS.length === 0) return;
        tails.push({
          population: name,
          component,
          lagFrames,
          lagS,
          samples: sizes.sizeMS.length,
          meanPathM: meanSpeed(samples, takes) * lagS,
          noiseFloorMS: floor,
          ...describe(sizes, floor),
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

function describe(sizes: TailSamples, floorMS: number): Described {
  const { sizeMS, track } = sizes;
  const tail = fitPowerLawTail(sizeMS, floorMS);
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
  const law = powerLawDensity(alpha, fromMS);
  const gaussian = compareDensities(sizeMS, track, samples, law, fitGaussianTail(sizeMS, samples, fromMS));
  const logNormal = compareDensities(sizeMS, track, samples, law, fitLogNormalTail(sizeMS, samples, fromMS));
  return {
    tailSamples: samples,
    tailTracks: new Set(track.subarray(0, samples)).size,
    exponent: alpha,
    exponentLow: alpha - Z95 * error.standardError,
    exponentHigh: alpha + Z95 * error.standardError,
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

function noiseWidth(
  samples: LagSamples,
  component: VelocityComponent,
  flow: readonly [number, number],
): number {
  const step = Math.max(1, Math.floor(samples.vxMS.length / NOISE_SAMPLES));
  let sum = 0;
  let count = 0;
  for (let i = 0; i < samples.vxMS.length; i += step) {
    const variance = componentNoise(samples, component, flow, i);
    if (!Number.isFinite(variance)) continue;
    sum += variance;
    count++;
  }
  return count > 0 ? Math.sqrt(sum / count) : 0;
}

function meanSpeed({ start, vxMS, vyMS }: LagSamples, takes: (track: number) => boolean): number {
  let sum = 0;
  let count = 0;
  for (let i = 0; i + 1 < start.length; i++) {
    if (!takes(i)) continue;
    for (let k = start[i]; k < start[i + 1]; k++, count++) sum += Math.hypot(vxMS[k], vyMS[k]);
  }
  return sum / count;
}
