import type { Random } from '../random';
import { smoothPath } from './smooth-path';

/**
 * Ways in which the standard recording's tracers move, in px and frames: free ones on a parabola
 * across the flow, trapped ones that wander and burst, pairs that meet and part.
 */
const AXIS_STEP_PX = 3;
const FREE_WOBBLE_PX = 0.35;
const TRAPPED_WOBBLE_PX = 0.25;
const WOBBLE_FRAMES = 8;
const BURST_PER_FRAME = 0.03;
const BURST_FRAMES_LEAST = 2;
const BURST_FRAMES_MOST = 5;
const BURST_STEP_LEAST_PX = 0.6;
const BURST_STEP_MOST_PX = 5;
/** Quantum of circulation in px^2 per frame, for 10 um pixels and 5 ms. */
const KAPPA_PX2 = 6;
const PAIR_AMPLITUDE = 1.2;

export interface Path {
  xPx: Float64Array;
  yPx: Float64Array;
}

/** Carried along x by a parabolic flow: `AXIS_STEP_PX` a frame in the middle row, 0 at top and bottom. */
export function freePath(random: Random, x: number, y: number, frames: number, heightPx: number): Path {
  const fromMiddle = (2 * y) / heightPx - 1;
  const step = AXIS_STEP_PX * Math.max(0, 1 - fromMiddle * fromMiddle);
  const xPx = smoothPath(random, frames, 1, FREE_WOBBLE_PX, WOBBLE_FRAMES);
  const yPx = smoothPath(random, frames, 1, FREE_WOBBLE_PX, WOBBLE_FRAMES);
  return { xPx: xPx.map((wobble, k) => x + step * k + wobble), yPx: yPx.map((wobble) => y + wobble) };
}

/** Wanders slowly; now and then runs straight for a few frames, with speeds that fall as v^-3. */
export function trappedPath(random: Random, x: number, y: number, frames: number): Path {
  const xPx = smoothPath(random, frames, 1, TRAPPED_WOBBLE_PX, WOBBLE_FRAMES);
  const yPx = smoothPath(random, frames, 1, TRAPPED_WOBBLE_PX, WOBBLE_FRAMES);
  let left = 0;
  let stepX = 0;
  let stepY = 0;
  let movedX = 0;
  let movedY = 0;
  for (let k = 0; k < frames; k++) {
    if (left > 0) {
      movedX += stepX;
      movedY += stepY;
      left--;
    } else if (random.uniform() < BURST_PER_FRAME) {
      left = BURST_FRAMES_LEAST + random.integer(BURST_FRAMES_MOST - BURST_FRAMES_LEAST + 1);
      // Inverse of the Pareto distribution whose density falls as v^-3.
      const speed = Math.min(BURST_STEP_MOST_PX, BURST_STEP_LEAST_PX / Math.sqrt(1 - random.uniform()));
      const angle = 2 * Math.PI * random.uniform();
      stepX = speed * Math.cos(angle);
      stepY = speed * Math.sin(angle);
    }
    xPx[k] += x + movedX;
    yPx[k] += y + movedY;
  }
  return { xPx, yPx };
}

/**
 * Two tracers whose distance is A sqrt(kappa |t - t0|) around a centre that wanders; the direction
 * in which they part is square to the one in which they met.
 */
export function pairPaths(
  random: Random,
  x: number,
  y: number,
  frames: number,
  t0Frames: number,
): [Path, Path] {
  const centre = { x: smoothPath(random, frames, 1, 0.1, 30), y: smoothPath(random, frames, 1, 0.1, 30) };
  const angle = 2 * Math.PI * random.uniform();
  const halfDistance = (k: number) => 0.5 * PAIR_AMPLITUDE * Math.sqrt(KAPPA_PX2 * Math.abs(k - t0Frames));
  const path = (sign: number): Path => {
    const xPx = new Float64Array(frames);
    const yPx = new Float64Array(frames);
    for (let k = 0; k < frames; k++) {
      const turned = k < t0Frames ? angle : angle + Math.PI / 2;
      xPx[k] = x + centre.x[k] + sign * halfDistance(k) * Math.cos(turned);
      yPx[k] = y + centre.y[k] + sign * halfDistance(k) * Math.sin(turned);
    }
    return { xPx, yPx };
  };
  return [path(1), path(-1)];
}
