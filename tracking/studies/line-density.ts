import { chi2At } from '../estimates/decay';
import type { Estimate } from '../estimates/estimate';
import { lineDensityEstimates } from '../estimates/line-density-estimates';
import { densityFromTransverse } from '../estimates/line-velocity';
import { LINE_VELOCITY_FACTOR } from '../estimates/line-velocity-law';
import type { Kernels } from '../kernels/kernels';
import { Z95 } from '../normal-tail';
import { findPopulations } from '../populations/populations';
import { piecesOf } from '../populations/pieces';
import { RECIPE_DEFAULTS } from '../recipe';
import { SETTLING_S } from '../simulate/beads-on-curved-lines';
import { wavyVelocityFactor } from '../simulate/local-induction/wavy-velocity';
import { marksOfScene } from '../simulate/marks-of-scene';
import type { Scene } from '../simulate/scene';
import { standardCamera } from '../simulate/standard-scene';
import { tangleScene } from '../simulate/tangle-scene';
import { trueTracks } from '../simulate/true-tracks';
import type { Conditions, Recipe, Tracks } from '../types';
import { KAPPA_M2_S } from '../units';
import type { LineDensityCase } from './line-density-cases';
import { runRecording } from './recording-run';

/** What one simulated tangle gave, over what it was made with. */
export interface LineDensityTrial {
  seed: number;
  method: string;
  /** Estimate over truth with the method's systematic inputs at their true values; null where it was not usable. */
  ratio: number | null;
  /** Truth inside the 95 % interval of all errors. */
  covers: boolean | null;
  /** Standard error of ln L from chance, as stated. */
  statistical: number | null;
  note: string;
}

/** What a method gave over all seeds of a case. */
export interface LineDensityStudy {
  case: string;
  method: string;
  trials: number;
  used: number;
  /** Geometric mean of estimate over truth, and the standard deviation of its logarithm. */
  meanRatio: number;
  sdOfLn: number;
  /** Share of the intervals that hold the truth: of all errors, and of the statistical ones alone. */
  coverage: number;
  statisticalCoverage: number;
  /** Median half width of the statistical interval over 1.96 standard deviations of the estimates. */
  widthOverScatter: number;
  /** Share of trials in which the method declined or its note says what is broken. */
  warned: number;
  /** Whether what is promised was kept; absent where nothing is. */
  kept?: boolean;
}

/** Of 100 seeds, the intervals that hold the truth, at least and at most. */
const COVERAGE_LEAST = 0.88;
const COVERAGE_MOST = 0.99;
const WIDTH_MOST = 1.5;
/** Where an assumption is broken a method must decline or say so in this share of trials. */
const WARNED_LEAST = 0.8;

const PIXEL_M = 1e-5;
const INTERVAL_S = 0.005;
const SIZE_PX = 512;
const FRAMES = 120;
const SCENE = {
  frames: FRAMES,
  pixelSizeM: PIXEL_M,
  frameIntervalS: INTERVAL_S,
  sheetThicknessM: 2e-4,
  beadsPerMetre: 5000,
  vnMPerS: 4e-3,
  tangleVelocityMPerS: -1e-3,
};
const RECIPE: Recipe = {
  ...RECIPE_DEFAULTS,
  lagsFrames: [1, 2, 4],
  bootstrapDraws: 300,
  spotSizePx: 1,
  gain: 1,
  readNoise_e: 0,
  closestApproach_m: 4 * PIXEL_M,
};

/** Error added to the positions of true tracks. */
const SIGMA_PX = 0.15;
const SHORTEST_TRACK_FRAMES = 3;
/** Frames in which every line is marked: some of them are there in all. */
const MARKED_FRAMES = [20, 60, 100];

/** What a tangle's tracks are, and the recipe by which they are looked at. */
export interface TrackedTangle {
  tracks: Tracks;
  recipe: Recipe;
}

/** The true tracks, with errors. */
export function tracksOfTruth(scene: Scene, seed: number): TrackedTangle {
  const options = { sigmaPx: SIGMA_PX, seed, shortestTrackFrames: SHORTEST_TRACK_FRAMES };
  return { tracks: trueTracks(scene, options).tracks, recipe: RECIPE };
}

/** Tracks of a recording that is rendered, searched and linked; camera and spot size are found. */
export function tracksOfRecording(scene: Scene, seed: number, kernels?: Kernels): TrackedTangle {
  const request = { shortestTrackFrames: SHORTEST_TRACK_FRAMES };
  const { tracks, recipe } = runRecording(scene, standardCamera(seed), request, kernels);
  const { lagsFrames, bootstrapDraws, closestApproach_m } = RECIPE;
  return { tracks, recipe: { ...recipe, lagsFrames, bootstrapDraws, closestApproach_m } };
}

/**
 * Line density from the tracks of simulated tangles (populations found, not given): one trial per seed and method.
 *
 * @param tracksOf true tracks or those of a recording.
 */
export function lineDensityTrials(
  one: LineDensityCase,
  seeds: readonly number[],
  tracksOf: (scene: Scene, seed: number) => TrackedTangle = tracksOfTruth,
): LineDensityTrial[] {
  const { lineDensityM2, sizePx = SIZE_PX } = one;
  const image = { width: sizePx, height: sizePx, frames: FRAMES };
  const filled = { ...SCENE, ...one.scene };
  const conditions: Conditions = {
    pixelSize_m: PIXEL_M,
    frameInterval_s: INTERVAL_S,
    sheetThickness_m: filled.sheetThicknessM,
    temperature_K: 1.85,
    heatFlux_W_m2: 675,
    flowDirection: [1, 0],
    ...one.conditions,
  };
  // One free tracer to three on lines, so that both populations are there in every case.
  const volumeM3 = (sizePx * PIXEL_M) ** 2 * filled.sheetThicknessM;
  const freeTracersPerFrame = Math.round((lineDensityM2 * filled.beadsPerMetre * volumeM3) / 3);
  const factor = filled.curved
    ? wavyVelocityFactor(filled.curved, 1 / Math.sqrt(lineDensityM2), [
        SETTLING_S,
        SETTLING_S + FRAMES * INTERVAL_S,
      ])
    : LINE_VELOCITY_FACTOR;
  // Vinen 1957: 1 / L grows by chi_2 kappa / (2 pi) per time; the method tells L of the middle.
  const decayPerS = one.decays
    ? (lineDensityM2 * chi2At(conditions.temperature_K ?? Number.NaN) * KAPPA_M2_S) / (2 * Math.PI)
    : 0;
  const truthM2 = lineDensityM2 / (1 + 0.5 * decayPerS * FRAMES * INTERVAL_S);
  return seeds.flatMap((seed) => {
    const scene = tangleScene({
      widthPx: sizePx,
      heightPx: sizePx,
      lineDensityM2,
      freeTracersPerFrame,
      ...filled,
      decayPerS,
      seed,
    });
    const { tracks, recipe } = tracksOf(scene, seed);
    const found = findPopulations(tracks, image, conditions, recipe);
    const pieces = piecesOf(tracks, found.population, found.changes);
    const { estimates } = lineDensityEstimates(
      pieces.tracks,
      pieces.population,
      found.summary.note,
      image,
      conditions,
      recipe,
      { pieces, changes: found.changes },
      marksOfScene(scene, MARKED_FRAMES),
    );
    // The prior speaks of the heat flux, from which the scene's lines are not made.
    return estimates
      .filter((e) => e.quantity === 'line_density' && e.method !== 'heat-flux-prior')
      .map((e) => trialOf(seed, e, truthM2, factor));
  });
}

function trialOf(seed: number, estimate: Estimate, truthM2: number, factor: number): LineDensityTrial {
  const { method, value, low, high, note, inputs } = estimate;
  if (value === null || low === null || high === null)
    return { seed, method, ratio: null, covers: null, statistical: null, note };
  const atTruth =
    method === 'line-velocity'
      ? densityFromTransverse(Number(inputs.transverseRms.value) ** 2, factor)
      : value;
  return {
    seed,
    method,
    ratio: atTruth / truthM2,
    covers: low <= truthM2 && truthM2 <= high,
    statistical: Number(inputs.statisticalErrorOfLnL.value),
    note,
  };
}

/** Bias, scatter and coverage per method. */
export function summariseLineDensity(
  one: LineDensityCase,
  trials: readonly LineDensityTrial[],
): LineDensityStudy[] {
  const methods = [...new Set(trials.map((trial) => trial.method))];
  return methods.map((method) => {
    const own = trials.filter((trial) => trial.method === method);
    const used = own.flatMap(({ ratio, statistical, covers }) =>
      ratio === null || statistical === null ? [] : [{ ln: Math.log(ratio), statistical, covers }],
    );
    const mean = used.reduce((sum, { ln }) => sum + ln, 0) / used.length;
    const sdOfLn = Math.sqrt(used.reduce((sum, { ln }) => sum + (ln - mean) ** 2, 0) / (used.length - 1));
    const stated = used.map((trial) => trial.statistical).sort((a, b) => a - b);
    const warned =
      own.filter(({ ratio, note }) => ratio === null || one.broken?.says.test(note)).length / own.length;
    const held = used.filter(({ ln, statistical }) => Math.abs(ln) <= Z95 * statistical).length;
    const statisticalCoverage = held / used.length;
    const widthOverScatter = (stated[stated.length >> 1] ?? Number.NaN) / sdOfLn;
    const holds =
      statisticalCoverage >= COVERAGE_LEAST &&
      statisticalCoverage <= COVERAGE_MOST &&
      widthOverScatter <= WIDTH_MOST;
    const promised = one.holds.includes(method)
      ? { kept: holds }
      : one.broken?.methods.includes(method)
        ? { kept: warned >= WARNED_LEAST }
        : {};
    return {
      case: one.name,
      method,
      trials: own.length,
      used: used.length,
      meanRatio: Math.exp(mean),
      sdOfLn,
      coverage: used.filter(({ covers }) => covers).length / used.length,
      statisticalCoverage,
      widthOverScatter,
      warned,
      ...promised,
    };
  });
}
