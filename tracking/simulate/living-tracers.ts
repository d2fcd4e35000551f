import { createRandom, mixSeed, type Random } from '../random';
import { blink } from './blink';
import { KIND_FREE, KIND_TRAPPED, type Scene } from './scene';
import { SceneBuilder } from './scene-builder';
import { freePath, pairPaths, trappedPath, type Path } from './standard-motion';

/** Size of a recording and how many tracers of what brightness live in it. */
export interface LivingTracersOptions {
  widthPx: number;
  heightPx: number;
  frames: number;
  /** Tracers in sight at once, on average. */
  tracers: number;
  seed: number;
  /** Photoelectrons of one tracer, drawn once for its whole life. */
  brightnessE: (random: Random) => number;
}

const FREE_SHARE = 0.55;
const PAIR_SHARE = 0.1;
const LIFE_LEAST_FRAMES = 3;
const LIFE_MEAN_FRAMES = 80;
const BLINK_PER_FRAME = 0.01;
/** Tracers start in a box larger than the image, so that as many drift in as drift out. */
const ROOM_ALONG_PX = 300;
const ROOM_ACROSS_PX = 40;
/** Births begin so long before frame 0 that hardly any earlier one would still be alive. */
const EARLIER_FRAMES = 400;

/** Tracers of both kinds that appear, move, blink, leave and meet, in a steady state. */
export function livingTracers(options: LivingTracersOptions): Scene {
  const { widthPx, heightPx, frames, tracers, seed, brightnessE } = options;
  const builder = new SceneBuilder(widthPx, heightPx, frames);
  const random = createRandom(mixSeed(seed, 1));
  const boxWidth = widthPx + 2 * ROOM_ALONG_PX;
  const boxHeight = heightPx + 2 * ROOM_ACROSS_PX;
  const perFrame =
    (tracers / (LIFE_LEAST_FRAMES + LIFE_MEAN_FRAMES)) * ((boxWidth * boxHeight) / (widthPx * heightPx));
  const births = random.poisson(perFrame * (frames + EARLIER_FRAMES));
  for (let i = 0; i < births; i++) addTracers(createRandom(mixSeed(seed, i + 2)));
  return builder.build(Number.NaN, []);

  function addTracers(chance: Random): void {
    const born = Math.floor(chance.uniform() * (frames + EARLIER_FRAMES)) - EARLIER_FRAMES;
    const life = Math.round(LIFE_LEAST_FRAMES - LIFE_MEAN_FRAMES * Math.log(1 - chance.uniform()));
    if (born + life <= 0) return;
    const x = chance.uniform() * boxWidth - ROOM_ALONG_PX;
    const y = chance.uniform() * boxHeight - ROOM_ACROSS_PX;
    const add = (kind: number, path: Path) => {
      const xPx = new Float64Array(frames);
      const yPx = new Float64Array(frames);
      const visible = new Uint8Array(frames);
      for (let k = Math.max(0, born); k < Math.min(frames, born + life); k++) {
        xPx[k] = path.xPx[k - born];
        yPx[k] = path.yPx[k - born];
        visible[k] = 1;
      }
      blink(chance, visible, BLINK_PER_FRAME);
      builder.add(kind, -1, xPx, yPx, visible, brightnessE(chance));
    };
    const draw = chance.uniform();
    if (draw < FREE_SHARE) {
      add(KIND_FREE, freePath(chance, x, y, life, heightPx));
    } else if (draw < 1 - PAIR_SHARE / 2) {
      add(KIND_TRAPPED, trappedPath(chance, x, y, life));
    } else {
      // One birth of a pair makes two tracers, hence half the share.
      for (const path of pairPaths(chance, x, y, life, chance.uniform() * life)) add(KIND_TRAPPED, path);
    }
  }
}
