import type { TimedPoints } from './assess/frame-order';
import { matchPoints, nearestNeighbourPx } from './assess/point-match';
import { lookAtTruth } from './assess/true-spots';
import type { Scene, SceneCamera } from './simulate/scene';

/** A found point farther than this from the truth is another thing. */
export const FOUND_WITHIN_PX = 2;
/** Points without a neighbour within this distance count as isolated: 5 spot sizes. */
export const ISOLATED_PX = 6;

/** How the points that were found compare with where the tracers are. */
export interface PointAssessment {
  truePoints: number;
  foundShare: number;
  isolatedPoints: number;
  isolatedFoundShare: number;
  points: number;
  falseShare: number;
  /** Root mean square of the position error of isolated points per axis, px. */
  rmsXPx: number;
  rmsYPx: number;
  /** The same of the Cramer-Rao bounds of the same points. */
  boundXPx: number;
  boundYPx: number;
  /** Largest of the two ratios of rms error to bound. */
  rmsOverBound: number;
  /** Root mean square of error over stated standard error; 1 where errors are honest. */
  errorOverStated: number;
}

/** Points of tracks, or single spots, with their stated standard errors. */
export interface FoundPoints extends TimedPoints {
  sxPx: ArrayLike<number>;
  syPx: ArrayLike<number>;
}

/** Compares points with the scene that they were found in. */
export function assessPoints(scene: Scene, camera: SceneCamera, found: FoundPoints): PointAssessment {
  const partner = matchPoints(scene, found, scene.frames, FOUND_WITHIN_PX);
  const nearest = nearestNeighbourPx(scene, scene.frames);
  const truth = lookAtTruth(scene, camera);
  let matched = 0;
  let isolated = 0;
  let isolatedMatched = 0;
  let errorX = 0;
  let errorY = 0;
  let boundX = 0;
  let boundY = 0;
  let stated = 0;
  for (let i = 0; i < partner.length; i++) {
    const alone = nearest[i] > ISOLATED_PX;
    if (alone) isolated++;
    const j = partner[i];
    if (j < 0) continue;
    matched++;
    if (!alone) continue;
    isolatedMatched++;
    const bound = truth.bound(i);
    const dx = found.xPx[j] - scene.xPx[i];
    const dy = found.yPx[j] - scene.yPx[i];
    errorX += dx * dx;
    errorY += dy * dy;
    boundX += bound.sxPx * bound.sxPx;
    boundY += bound.syPx * bound.syPx;
    stated += 0.5 * ((dx / found.sxPx[j]) ** 2 + (dy / found.syPx[j]) ** 2);
  }
  const points = found.frame.length;
  const rms = (sum: number) => Math.sqrt(sum / isolatedMatched);
  return {
    truePoints: partner.length,
    foundShare: matched / partner.length,
    isolatedPoints: isolated,
    isolatedFoundShare: isolatedMatched / isolated,
    points,
    falseShare: (points - matched) / points,
    rmsXPx: rms(errorX),
    rmsYPx: rms(errorY),
    boundXPx: rms(boundX),
    boundYPx: rms(boundY),
    rmsOverBound: Math.sqrt(Math.max(errorX / boundX, errorY / boundY)),
    errorOverStated: rms(stated),
  };
}
