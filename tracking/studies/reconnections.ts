import { findCandidates } from '../pairs/find-candidates';
import { KIND_TRAPPED } from '../simulate/scene';
import { tangleScene } from '../simulate/tangle-scene';
import { trueTracks } from '../simulate/true-tracks';

/** Pairs that reconnect among decoys, in a tangle. */
export interface ReconnectionCase {
  /** Localization error, px of 10 um. */
  sigmaPx: number;
  /** Points on each side of a meeting, least and most. */
  sideFrames: [low: number, high: number];
}

export interface ReconnectionFigures extends ReconnectionCase {
  recordings: number;
  pairs: number;
  decoys: number;
  accepted: number;
  right: number;
  precision: number;
  recall: number;
}

/** Of 60 pairs and 60 decoys over five recordings at 1.5 um and 8 points a side or more. */
export const PRECISION_LEAST = 0.9;
export const RECALL_LEAST = 0.8;

const SIZE_PX = 512;
const FRAMES = 160;
const PIXEL_M = 1e-5;
const INTERVAL_S = 0.005;

/**
 * Simulated tracks at 200 frames/s with pairs that reconnect and as many that pass straight, pass with a
 * turn or stay together, one recording per seed; how many of those accepted are right, and how many of
 * those that are there. Populations are the true ones.
 */
export function studyReconnections(
  { sigmaPx, sideFrames }: ReconnectionCase,
  seeds: readonly number[],
  pairsEach = 12,
): ReconnectionFigures {
  const sum = { pairs: 0, accepted: 0, right: 0 };
  for (const seed of seeds) {
    const scene = tangleScene({
      widthPx: SIZE_PX,
      heightPx: SIZE_PX,
      frames: FRAMES,
      pixelSizeM: PIXEL_M,
      frameIntervalS: INTERVAL_S,
      sheetThicknessM: 2e-4,
      lineDensityM2: 6e6,
      beadsPerMetre: 3500,
      freeTracersPerFrame: 20,
      vnMPerS: 4e-3,
      tangleVelocityMPerS: -1e-3,
      events: pairsEach,
      decoys: pairsEach,
      eventSideFrames: sideFrames,
      seed,
    });
    const { tracks, tracer } = trueTracks(scene, { sigmaPx, seed, shortestTrackFrames: 3 });
    const population = Uint8Array.from(tracer, (i) => (scene.kind[i] === KIND_TRAPPED ? 0 : 1));
    const { candidates } = findCandidates(
      tracks,
      population,
      { width: SIZE_PX, height: SIZE_PX, frames: FRAMES },
      { pixelSize_m: PIXEL_M, frameInterval_s: INTERVAL_S },
      { closestApproach_m: 5e-5, falseDiscoveryRate: 0.1, seed },
    );
    const key = (a: number, b: number) => `${Math.min(a, b)} ${Math.max(a, b)}`;
    const truth = new Set(scene.events.map(({ tracerA, tracerB }) => key(tracerA, tracerB)));
    const accepted = candidates.filter((candidate) => candidate.accepted);
    const found = new Set(
      accepted.map(({ trackA, trackB }) => key(tracer[trackA], tracer[trackB])).filter((k) => truth.has(k)),
    );
    sum.pairs += truth.size;
    sum.accepted += accepted.length;
    sum.right += found.size;
  }
  return {
    sigmaPx,
    sideFrames,
    recordings: seeds.length,
    pairs: sum.pairs,
    decoys: pairsEach * seeds.length,
    accepted: sum.accepted,
    right: sum.right,
    precision: sum.accepted > 0 ? sum.right / sum.accepted : 0,
    recall: sum.pairs > 0 ? sum.right / sum.pairs : 0,
  };
}
