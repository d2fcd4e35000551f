import type { Scene } from './scene';

/** Way of each point of a scene while the shutter is open, px; entry i belongs to point i. */
export interface PointBlur {
  xPx: Float32Array;
  yPx: Float32Array;
}

/** Images this much apart, in spot sizes, add up to a smooth streak. */
const STEP_SIGMAS = 0.5;
const STEPS_MOST = 64;

/**
 * Way of every point during the exposure: its velocity from the frames before and after, as far as
 * the tracer shines there, times the time that the shutter is open.
 *
 * @param exposureFrames time that the shutter is open over the frame interval.
 */
export function blurOfPoints(scene: Scene, exposureFrames: number): PointBlur {
  const { frame, xPx, yPx, start, tracers } = scene;
  const blur = { xPx: new Float32Array(frame.length), yPx: new Float32Array(frame.length) };
  for (let i = 0; i < tracers; i++) {
    for (let p = start[i]; p < start[i + 1]; p++) {
      const before = Math.max(start[i], p - 1);
      const after = Math.min(start[i + 1] - 1, p + 1);
      const frames = frame[after] - frame[before];
      if (frames === 0) continue;
      blur.xPx[p] = ((xPx[after] - xPx[before]) / frames) * exposureFrames;
      blur.yPx[p] = ((yPx[after] - yPx[before]) / frames) * exposureFrames;
    }
  }
  return blur;
}

/** Images along its way by which a point is drawn. */
export function blurSteps(blur: PointBlur, point: number, spotSigmaPx: number): number {
  const way = Math.hypot(blur.xPx[point], blur.yPx[point]);
  return Math.min(STEPS_MOST, 1 + Math.ceil(way / (STEP_SIGMAS * spotSigmaPx)));
}
