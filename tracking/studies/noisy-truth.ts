import type { TrueSpots } from '../assess/true-spots';
import { createRandom, mixSeed } from '../random';
import type { Scene } from '../simulate/scene';
import { createSpotSink } from '../spots';
import type { Spots } from '../types';

/** Relative error of the brightness of a spot that was fitted well. */
const BRIGHTNESS_ERROR = 0.08;

/**
 * Every point of a scene as a perfect detection would find it: none missed, none false, each off by
 * its Cramer-Rao bound. Linking these shows what no better detection could improve.
 */
export function noisyTruth(scene: Scene, truth: TrueSpots, seed: number): Spots {
  const random = createRandom(mixSeed(seed, 0x7c17));
  const { frame, xPx, yPx, brightnessE } = scene;
  const order = Array.from(frame.keys()).sort(
    (a, b) => frame[a] - frame[b] || yPx[a] - yPx[b] || xPx[a] - xPx[b] || a - b,
  );
  const sink = createSpotSink(order.length);
  for (const i of order) {
    const { sxPx, syPx } = truth.bound(i);
    sink.push(
      frame[i],
      xPx[i] + sxPx * random.normal(),
      yPx[i] + syPx * random.normal(),
      sxPx,
      syPx,
      brightnessE[i] * (1 + BRIGHTNESS_ERROR * random.normal()),
      truth.snr(i),
      0,
    );
  }
  return sink.spots();
}
