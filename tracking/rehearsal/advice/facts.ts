import { nearestNeighbourPx } from '../../assess/point-match';
import { sortedQuantile } from '../../quantile';
import { blurOfPoints } from '../../simulate/motion-blur';
import { KIND_TRAPPED } from '../../simulate/scene';
import type { Recipe } from '../../types';
import type { RehearsalAssessment } from '../assessment';
import type { RehearsalTruth } from '../truth';

/** All that advice is drawn from: what the truth is like and how well it was recovered. */
export interface AdviceFacts {
  made: RehearsalTruth['made'];
  assessed: Omit<RehearsalAssessment, 'advice'>;
  recipe: Pick<Recipe, 'longestStepPx' | 'falseSpotsPerFrame'>;
  spotSizePx: number;
  frames: number;
  widthPx: number;
  heightPx: number;
  /** Way from one frame to the next, px: mean and 99th percentile of all tracers, root mean square of trapped ones. */
  meanStepPx: number;
  longStepPx: number;
  trappedStepPx: number;
  /** Mean distance to the nearest other tracer, px, 50 where it is farther; null where not all tracers are known. */
  neighbourPx: number | null;
  /** Tracers in a frame, on average. */
  tracersInSight: number;
  /** Tracers that sit on lines. */
  trappedTracers: number;
  /** Way during the exposure, px, root mean square. */
  blurPx: number;
  /** Frames in which a tracer shines, median. */
  medianLifeFrames: number;
}

/** Neighbours are looked for no farther, px. */
const FAR_PX = 50;

/** Draws the facts from truth and assessment. */
export function adviceFacts(
  truth: RehearsalTruth,
  assessed: Omit<RehearsalAssessment, 'advice'>,
  recipe: AdviceFacts['recipe'],
): AdviceFacts {
  const { scene, camera, made } = truth;
  const steps: number[] = [];
  let trappedSquares = 0;
  let trappedSteps = 0;
  const lives: number[] = [];
  for (let i = 0; i < scene.tracers; i++) {
    lives.push(scene.start[i + 1] - scene.start[i]);
    for (let p = scene.start[i] + 1; p < scene.start[i + 1]; p++) {
      if (scene.frame[p] !== scene.frame[p - 1] + 1) continue;
      const step = Math.hypot(scene.xPx[p] - scene.xPx[p - 1], scene.yPx[p] - scene.yPx[p - 1]);
      steps.push(step);
      if (scene.kind[i] !== KIND_TRAPPED) continue;
      trappedSquares += step * step;
      trappedSteps++;
    }
  }
  const nearest = nearestNeighbourPx(scene, scene.frames);
  const blur = blurOfPoints(scene, camera.exposureFrames ?? 0);
  const mean = (values: ArrayLike<number>, of: (value: number) => number) => {
    let sum = 0;
    for (let i = 0; i < values.length; i++) sum += of(values[i]);
    return values.length > 0 ? sum / values.length : 0;
  };
  return {
    made,
    assessed,
    recipe,
    spotSizePx: camera.spotSigmaPx,
    frames: scene.frames,
    widthPx: scene.widthPx,
    heightPx: scene.heightPx,
    meanStepPx: mean(steps, (step) => step),
    longStepPx: steps.length > 0 ? sortedQuantile(Float64Array.from(steps).sort(), 0.99) : 0,
    trappedStepPx: trappedSteps > 0 ? Math.sqrt(trappedSquares / trappedSteps) : 0,
    neighbourPx: truth.kind === 'planted' ? null : mean(nearest, (distance) => Math.min(FAR_PX, distance)),
    tracersInSight: scene.frame.length / scene.frames,
    trappedTracers: scene.kind.reduce((sum, kind) => sum + (kind === KIND_TRAPPED ? 1 : 0), 0),
    blurPx: Math.sqrt(mean(blur.xPx, (x) => x * x) + mean(blur.yPx, (y) => y * y)),
    medianLifeFrames: lives.length > 0 ? sortedQuantile(Float64Array.from(lives).sort(), 0.5) : 0,
  };
}
