import { createDetector } from '../detect';
import { measureImage, pickModelFrames } from '../measure-image';
import { resolveRecipe } from '../recipe';
import { createSpotSink } from '../spots';
import type { Recipe } from '../types';
import { noiseFrame, NOISE_FRAMES, NOISE_KINDS, NOISE_SIDE_PX, type NoiseKind } from './noise-kinds';

/** What is promised of the measured rate: within this factor of the wanted one. */
export const FALSE_RATE_FACTOR = 1.5;
/** Rates that are wanted of frames of `NOISE_SIDE_PX` squared. */
export const FALSE_RATES_WANTED = [0.1, 1, 10] as const;

/** One line of the study. */
export interface FalseSpotsRow {
  kind: string;
  /** Spots per frame: wanted of the recipe, and found where there are none. */
  wanted: number;
  measured: number;
  /** Spots found, and frames looked at. */
  count: number;
  frames: number;
}

export interface FalseSpotsOptions {
  /** Frames are looked at until so many spots are found, or as many frames as should make twice as many. */
  spotsLeast: number;
  seed: number;
  effort?: Recipe['effort'];
}

/** Measures camera and background of a recording of noise, then counts what detection finds in it. */
export function falseSpots(kind: NoiseKind, wanted: number, options: FalseSpotsOptions): FalseSpotsRow {
  const { spotsLeast, seed, effort = 'full' } = options;
  const picked = pickModelFrames(NOISE_FRAMES, NOISE_SIDE_PX * NOISE_SIDE_PX, effort);
  const request = { spotSizePx: kind.spotSigmaPx, falseSpotsPerFrame: wanted, effort };
  const model = measureImage(
    picked.map((frame) => noiseFrame(kind, frame, seed)),
    request,
    picked,
  );
  const recipe = resolveRecipe(request, { ...model, frames: NOISE_FRAMES, pixelSizeM: 1e-5 });
  const detector = createDetector(model, recipe);
  const sink = createSpotSink();
  const framesMost = Math.ceil((2 * spotsLeast) / wanted);
  let frames = 0;
  for (; frames < framesMost && sink.count < spotsLeast; frames++) {
    detector.detect(noiseFrame(kind, frames, seed + 1), frames % NOISE_FRAMES, sink);
  }
  return { kind: kind.kind, wanted, measured: sink.count / frames, count: sink.count, frames };
}

/** All kinds of noise at all wanted rates. */
export function studyFalseSpots(options: FalseSpotsOptions): FalseSpotsRow[] {
  return NOISE_KINDS.flatMap((kind) => FALSE_RATES_WANTED.map((wanted) => falseSpots(kind, wanted, options)));
}

/** True where the rate is what was wanted within the promised factor. */
export function keepsFalseRate({ wanted, measured }: FalseSpotsRow): boolean {
  return measured <= FALSE_RATE_FACTOR * wanted && measured >= wanted / FALSE_RATE_FACTOR;
}
