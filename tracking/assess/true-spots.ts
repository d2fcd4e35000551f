import { positionBound, type PositionBound } from '../cramer-rao';
import { peakShare } from '../pixel-gaussian';
import type { Scene, SceneCamera } from '../simulate/scene';
import { sheetLight } from '../simulate/sheet-light';

/** What a camera could at best make of each point of a scene, by the point's number. */
export interface TrueSpots {
  /** Peak / sqrt(peak + background + read variance), electrons, of a spot centred on its pixel. */
  snr(point: number): number;
  /** Cramer-Rao bound of the position, from the pixels that exist. */
  bound(point: number): PositionBound;
}

/** Looks at a scene as the camera does, but without noise and one tracer at a time. */
export function lookAtTruth(scene: Scene, camera: SceneCamera): TrueSpots {
  const { widthPx, heightPx, xPx, yPx, brightnessE } = scene;
  const light = sheetLight(camera, widthPx, heightPx);
  const share = peakShare(camera.spotSigmaPx);
  const readVariance = camera.readNoiseE * camera.readNoiseE;
  const column = (point: number) => Math.max(0, Math.min(widthPx - 1, Math.round(xPx[point])));
  const row = (point: number) => Math.max(0, Math.min(heightPx - 1, Math.round(yPx[point])));
  const background = (x: number, y: number) => camera.backgroundE * light[y * widthPx + x];
  const known = new Map<number, PositionBound>();
  return {
    snr(point) {
      const peak = share * brightnessE[point];
      return peak / Math.sqrt(peak + background(column(point), row(point)) + readVariance);
    },
    bound(point) {
      const before = known.get(point);
      if (before) return before;
      const x = column(point);
      const y = row(point);
      const bound = positionBound(
        brightnessE[point],
        background(x, y),
        camera.spotSigmaPx,
        readVariance,
        xPx[point] - x,
        yPx[point] - y,
        { left: -x, right: widthPx - 1 - x, top: -y, bottom: heightPx - 1 - y },
      );
      known.set(point, bound);
      return bound;
    },
  };
}
