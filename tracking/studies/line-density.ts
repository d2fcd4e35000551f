import type { Estimate } from '../estimates/estimate';
import { measureFlow } from '../measure-flow';
import { RECIPE_DEFAULTS } from '../recipe';
import type { TangleOptions } from '../simulate/tangle-options';
import { tangleScene } from '../simulate/tangle-scene';
import { trueTracks } from '../simulate/true-tracks';
import type { Conditions } from '../types';

/** What one simulated tangle gave, over what it was made with. */
export interface LineDensityTrial {
  seed: number;
  method: string;
  /** Estimate over truth; null where the method was not usable. */
  ratio: number | null;
  /** Truth inside the 95 % interval. */
  covers: boolean | null;
  /** Truth inside the interval of the statistical error alone. */
  coversStatistically: boolean | null;
  /** Standard error of ln L from chance, as stated. */
  statistical: number | null;
  note: string;
}

export interface LineDensityStudy {
  lineDensityM2: number;
  method: string;
  trials: number;
  used: number;
  /** Geometric mean of estimate over truth, and the standard deviation of its logarithm. */
  meanRatio: number;
  sdOfLn: number;
  /** Share of intervals that hold the truth, all errors and statistical errors only. */
  coverage: number;
  statisticalCoverage: number;
  /** Median half width of the statistical interval over 1.96 standard deviations of the estimates. */
  widthOverScatter: number;
  /** Share of trials in which the method declined or its note names what is broken. */
  warned: number;
}

/** What a tangle is made like where an assumption of the methods is broken. */
export type BrokenAssumption =
  'thick sheet' | 'few decorated lines' | 'lines across the flow' | 'one population';

const BROKEN: Record<
  BrokenAssumption,
  { scene: Partial<TangleOptions>; methods: readonly string[]; says: RegExp }
> = {
  'thick sheet': {
    scene: { sheetThicknessM: 4e-4 },
    methods: ['crossings', 'neighbour-distance'],
    says: /thick/,
  },
  'few decorated lines': {
    scene: { beadsPerMetre: 400 },
    methods: ['crossings', 'neighbour-distance', 'beads-per-length'],
    says: /Few lines are decorated/,
  },
  'lines across the flow': {
    scene: { acrossFlow: true },
    methods: ['crossings', 'neighbour-distance', 'beads-per-length'],
    says: /across the flow by preference/,
  },
  'one population': {
    scene: { freeTracersPerFrame: 160, beadsPerMetre: 0 },
    methods: ['crossings', 'visible-length', 'neighbour-distance', 'beads-per-length', 'line-velocity'],
    says: /named trapped/,
  },
};

const PIXEL_M = 1e-5;
const INTERVAL_S = 0.005;
const SIZE_PX = 512;
const FRAMES = 120;
const THICKNESS_M = 2e-4;

/**
 * Line density from the true tracks of simulated tangles (populations found, not given): one
 * trial per seed and method.
 *
 * @param sigmaPx error added to the tracks' positions.
 * @param broken an assumption that the tangle doesn't keep.
 */
export function lineDensityTrials(
  lineDensityM2: number,
  seeds: readonly number[],
  sigmaPx = 0.15,
  broken: BrokenAssumption | null = null,
): LineDensityTrial[] {
  const changed = broken ? BROKEN[broken].scene : {};
  const thicknessM = changed.sheetThicknessM ?? THICKNESS_M;
  const conditions: Conditions = {
    pixelSize_m: PIXEL_M,
    frameInterval_s: INTERVAL_S,
    sheetThickness_m: thicknessM,
    temperature_K: 1.85,
    heatFlux_W_m2: 675,
    flowDirection: [1, 0],
  };
  const recipe = {
    ...RECIPE_DEFAULTS,
    lagsFrames: [1, 2, 4],
    bootstrapDraws: 300,
    spotSizePx: 1,
    gain: 1,
    readNoise_e: 0,
    closestApproach_m: 4 * PIXEL_M,
  };
  return seeds.flatMap((seed) => {
    const scene = tangleScene({
      widthPx: SIZE_PX,
      heightPx: SIZE_PX,
      frames: FRAMES,
      pixelSizeM: PIXEL_M,
      frameIntervalS: INTERVAL_S,
      sheetThicknessM: thicknessM,
      lineDensityM2,
      beadsPerMetre: 5000,
      freeTracersPerFrame: 80,
      vnMPerS: 4e-3,
      tangleVelocityMPerS: -1e-3,
      burstsPerLineS: 0.5,
      ...changed,
      seed,
    });
    const { tracks } = trueTracks(scene, { sigmaPx, seed, shortestTrackFrames: 3 });
    const image = { width: SIZE_PX, height: SIZE_PX, frames: FRAMES };
    const { estimates } = measureFlow(tracks, image, conditions, recipe);
    // The prior speaks of the heat flux, from which the scene's lines are not made.
    return estimates
      .filter((e) => e.quantity === 'line_density' && e.method !== 'heat-flux-prior')
      .map((e) => trialOf(seed, e, lineDensityM2));
  });
}

function trialOf(seed: number, estimate: Estimate, truth: number): LineDensityTrial {
  const { method, value, low, high, note } = estimate;
  const none = {
    seed,
    method,
    ratio: null,
    covers: null,
    coversStatistically: null,
    statistical: null,
    note,
  };
  if (value === null || low === null || high === null) return none;
  const statistical = Number(estimate.inputs.statisticalErrorOfLnL?.value);
  return {
    seed,
    method,
    ratio: value / truth,
    covers: low <= truth && truth <= high,
    coversStatistically: Math.abs(Math.log(value / truth)) <= 1.96 * statistical,
    statistical,
    note,
  };
}

/** Bias, scatter and coverage per method. */
export function summariseLineDensity(
  lineDensityM2: number,
  trials: readonly LineDensityTrial[],
  broken: BrokenAssumption | null = null,
): LineDensityStudy[] {
  const methods = [...new Set(trials.map((trial) => trial.method))];
  return methods.map((method) => {
    const own = trials.filter((trial) => trial.method === method);
    const used = own.filter((trial) => trial.ratio !== null);
    const ln = used.map((trial) => Math.log(trial.ratio ?? Number.NaN));
    const mean = ln.reduce((a, b) => a + b, 0) / ln.length;
    const sdOfLn = Math.sqrt(ln.reduce((sum, v) => sum + (v - mean) ** 2, 0) / (ln.length - 1));
    const stated = used.map((trial) => trial.statistical ?? Number.NaN).sort((a, b) => a - b);
    const warned = own.filter(({ ratio, note }) =>
      broken ? ratio === null || BROKEN[broken].says.test(note) : ratio === null,
    );
    const share = (of: (trial: LineDensityTrial) => boolean | null) => used.filter(of).length / used.length;
    return {
      lineDensityM2,
      method,
      trials: own.length,
      used: used.length,
      meanRatio: Math.exp(mean),
      sdOfLn,
      coverage: share((trial) => trial.covers),
      statisticalCoverage: share((trial) => trial.coversStatistically),
      widthOverScatter: (stated[stated.length >> 1] ?? Number.NaN) / sdOfLn,
      warned: warned.length / own.length,
    };
  });
}

export const BROKEN_ASSUMPTIONS = Object.keys(BROKEN) as BrokenAssumption[];

/** Methods that the broken assumption concerns: they must decline or say so in 80 of 100 trials. */
export const concernedBy = (broken: BrokenAssumption): readonly string[] => BROKEN[broken].methods;
