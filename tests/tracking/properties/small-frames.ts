import { createDetector } from '@/tracking/detect';
import { createSpotPainter } from '@/tracking/detection/spot-painter';
import { createRandom } from '@/tracking/random';
import { resolveRecipe } from '@/tracking/recipe';
import { createSpotSink } from '@/tracking/spots';
import type { Frame, ImageModel, Spots } from '@/tracking/types';

export const BACKGROUND_E = 7;
const SIGMA_PX = 1.2;
const APART_PX = 9;

/** A camera of 2 counts per electron in front of an even background. */
export function evenModel(width: number, height: number): ImageModel {
  return {
    width,
    height,
    gainCountsPerE: 2,
    offsetCounts: 100,
    readNoiseE: 1.5,
    spotSigmaPx: SIGMA_PX,
    saturationCounts: Infinity,
    badPixels: new Uint8Array(width * height),
    backgroundE: new Float32Array(width * height).fill(BACKGROUND_E),
  };
}

/** A noisy frame with up to 12 clear spots, none of which touches another. */
export function spottedFrame(width: number, height: number, seed: number): Frame {
  const random = createRandom(seed);
  const electrons = new Float32Array(width * height).fill(BACKGROUND_E);
  const painter = createSpotPainter(width, height, SIGMA_PX, 6);
  const places: [number, number][] = [];
  for (let trial = 0; trial < 40 && places.length < 12; trial++) {
    const x = width * random.uniform() - 0.5;
    const y = height * random.uniform() - 0.5;
    if (places.some(([a, b]) => Math.hypot(a - x, b - y) < APART_PX)) continue;
    places.push([x, y]);
    painter.paint(electrons, x, y, 250 + 1500 * random.uniform());
  }
  const counts = electrons.map((e) => Math.round(100 + 2 * (random.poisson(e) + 1.5 * random.normal())));
  return { width, height, counts };
}

/** A frame whose pixel (x, y) is the pixel `from(x, y)` of another. */
export function rearranged(
  frame: Frame,
  width: number,
  height: number,
  from: (x: number, y: number) => [x: number, y: number],
): Frame {
  const counts = new Float32Array(width * height);
  for (let y = 0; y < height; y++) {
    for (let x = 0; x < width; x++) {
      const [a, b] = from(x, y);
      counts[y * width + x] = frame.counts[b * frame.width + a];
    }
  }
  return { width, height, counts };
}

export function detectIn(
  frames: readonly Frame[],
  model = evenModel(frames[0].width, frames[0].height),
): Spots {
  const recipe = resolveRecipe(
    { falseSpotsPerFrame: 0.01 },
    { ...model, frames: frames.length, pixelSizeM: 1e-5 },
  );
  const detector = createDetector(model, recipe);
  const sink = createSpotSink();
  frames.forEach((frame, f) => detector.detect(frame, f, sink));
  return sink.spots();
}

export interface PlainSpot {
  x: number;
  y: number;
  sx: number;
  sy: number;
  brightness: number;
}

/** Spots that no threshold hangs on: clear ones, one object each. */
export function clearSpots(spots: Spots): PlainSpot[] {
  return Array.from({ length: spots.count }, (_, i) => i)
    .filter((i) => spots.snr[i] > 9)
    .map((i) => ({
      x: spots.xPx[i],
      y: spots.yPx[i],
      sx: spots.sxPx[i],
      sy: spots.syPx[i],
      brightness: spots.brightness[i],
    }));
}
