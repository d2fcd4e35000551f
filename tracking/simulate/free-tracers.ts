import { createRandom, mixSeed } from '../random';
import { blink, tracerBrightness } from './blink';
import { followCapture } from './follow-capture';
import type { MovingLine } from './moving-line';
import { KIND_FREE, type SceneCapture } from './scene';
import type { SceneBuilder } from './scene-builder';
import { smoothPath } from './smooth-path';
import { AXIS_OVER_MEAN, freeBox } from './tangle-boxes';
import type { FilledTangleOptions } from './tangle-options';

/**
 * Free tracers carried by the normal fluid: a parabola across the channel, a slow wobble in all
 * directions (which takes them out of the sheet and back). They fill a box long enough upstream
 * that their number in the sheet stays the same.
 */
export function addFreeTracers(
  builder: SceneBuilder,
  o: FilledTangleOptions,
  lines: readonly MovingLine[],
  seed: number,
): SceneCapture[] {
  const captures: SceneCapture[] = [];
  const { frames, frameIntervalS: dt, pixelSizeM: px } = o;
  const [fx, fy] = o.flowDirection;
  const width = o.widthPx * px;
  const height = o.heightPx * px;
  const half = o.sheetThicknessM / 2;
  const {
    low: [lowX, lowY],
    high: [highX, highY, highZ],
  } = freeBox(o);
  const perVolume = o.freeTracersPerFrame / (width * height * o.sheetThicknessM);
  const count = createRandom(seed).poisson(perVolume * (highX - lowX) * (highY - lowY) * 2 * highZ);

  const xPx = new Float64Array(frames);
  const yPx = new Float64Array(frames);
  const visible = new Uint8Array(frames);
  for (let i = 0; i < count; i++) {
    const random = createRandom(mixSeed(seed, i + 1));
    const x0 = lowX + (highX - lowX) * random.uniform();
    const y0 = lowY + (highY - lowY) * random.uniform();
    const z0 = highZ * (2 * random.uniform() - 1);
    const across = -fy * (x0 - width / 2) + fx * (y0 - height / 2);
    const u = Math.max(0, AXIS_OVER_MEAN * o.vnMPerS * (1 - ((2 * across) / o.channelWidthM) ** 2));
    const path = [0, 1, 2].map(() => smoothPath(random, frames, dt, o.freeWobbleMPerS, o.freeWobbleTimeS));
    for (let k = 0; k < frames; k++) {
      path[0][k] += x0 + fx * u * k * dt;
      path[1][k] += y0 + fy * u * k * dt;
      path[2][k] += z0;
    }
    const caught = followCapture(path, lines, o.captureRadiusM);
    for (let k = 0; k < frames; k++) {
      xPx[k] = path[0][k] / px - 0.5;
      yPx[k] = path[1][k] / px - 0.5;
      visible[k] = Math.abs(path[2][k]) < half ? 1 : 0;
    }
    blink(random, visible, o.blinkPerFrame);
    const made = builder.add(
      KIND_FREE,
      -1,
      xPx,
      yPx,
      visible,
      tracerBrightness(random, o.brightnessE, o.brightnessSpread),
    );
    const tracer = caught === null ? undefined : builder.seenIn(made, caught);
    if (caught !== null && tracer !== undefined) captures.push({ tracer, frame: caught });
  }
  return captures;
}
