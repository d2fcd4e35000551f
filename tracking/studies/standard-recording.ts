import { assessPoints, measuredPoints, type PointAssessment } from '../assess';
import { scoreTracks, type TrackScores } from '../assess/track-scores';
import { createDetector } from '../detect';
import { linkSpots } from '../link';
import { measureImage, pickModelFrames } from '../measure-image';
import { resolveRecipe } from '../recipe';
import { createRenderer } from '../simulate/render';
import { standardCamera, standardScene, type StandardOptions } from '../simulate/standard-scene';
import { createSpotSink } from '../spots';
import { POINT_BRIDGED, type Frame, type RecipeRequest, type Tracks } from '../types';

/** What is promised for the standard recording at SNR 4. */
export const STANDARD_PROMISES = {
  snr: 4,
  foundShareLeast: 0.9,
  isolatedFoundShareLeast: 0.98,
  falseShareMost: 0.04,
  rmsOverBoundMost: 1.15,
} as const;

/** Figures of one standard recording: what stands in tracks, compared with where the tracers were. */
export interface StandardFigures {
  snr: number;
  seed: number;
  trueTracks: number;
  tracks: number;
  points: PointAssessment;
  scores: TrackScores;
  /** What the camera measurement made of 2 counts per electron, 1.5 electrons and 1.2 px. */
  gainCountsPerE: number;
  readNoiseE: number;
  spotSigmaPx: number;
}

/** Renders, measures, detects, links and assesses a standard recording, all settings automatic. */
export function studyStandardRecording(
  options: StandardOptions,
  request: RecipeRequest = {},
): StandardFigures {
  const scene = standardScene(options);
  const camera = standardCamera(options.seed);
  const { widthPx: width, heightPx: height, frames } = scene;
  const renderer = createRenderer(scene, camera);
  const frameAt = (index: number): Frame => ({
    width,
    height,
    counts: Float32Array.from(renderer.renderFrame(index)),
  });
  const model = measureImage(pickModelFrames(frames, width * height).map(frameAt), request);
  const recipe = resolveRecipe(request, { ...model, frames, pixelSizeM: 1e-5 });
  const detector = createDetector(model, recipe);
  const sink = createSpotSink();
  for (let f = 0; f < frames; f++) detector.detect(frameAt(f), f, sink);
  const tracks = linkSpots(sink.spots(), { frames, width, height }, recipe);
  return {
    snr: options.snr,
    seed: options.seed,
    trueTracks: scene.tracers,
    tracks: tracks.count,
    points: assessPoints(scene, camera, measuredPoints(tracks)),
    scores: scoreTracks(scene, withoutBridges(tracks), frames),
    gainCountsPerE: model.gainCountsPerE,
    readNoiseE: model.readNoiseE,
    spotSigmaPx: model.spotSigmaPx,
  };
}

/** True where the figures keep what is promised; they must be of a recording at that SNR. */
export function keepsPromises({ points }: Pick<StandardFigures, 'points'>): boolean {
  return (
    points.foundShare >= STANDARD_PROMISES.foundShareLeast &&
    points.isolatedFoundShare >= STANDARD_PROMISES.isolatedFoundShareLeast &&
    points.falseShare < STANDARD_PROMISES.falseShareMost &&
    points.rmsOverBound <= STANDARD_PROMISES.rmsOverBoundMost
  );
}

function withoutBridges(tracks: Tracks) {
  const start = [0];
  const kept: number[] = [];
  for (let i = 0; i < tracks.count; i++) {
    for (let p = tracks.start[i]; p < tracks.start[i + 1]; p++) {
      if ((tracks.flags[p] & POINT_BRIDGED) === 0) kept.push(p);
    }
    start.push(kept.length);
  }
  const pick = (from: ArrayLike<number>) => kept.map((p) => from[p]);
  return { start, frame: pick(tracks.frame), xPx: pick(tracks.xPx), yPx: pick(tracks.yPx) };
}
