import { peakShare } from '../pixel-gaussian';
import { createRandom, mixSeed, type Random } from '../random';
import { blink } from './blink';
import { KIND_FREE, KIND_TRAPPED, type Scene, type SceneCamera } from './scene';
import { SceneBuilder } from './scene-builder';
import { sheetLight } from './sheet-light';
import { freePath, pairPaths, trappedPath, type Path } from './standard-motion';

/** The recording on which the accuracy of detection and linking is stated. */
export interface StandardOptions {
  /** Peak / sqrt(peak + background + read variance) of every spot, electrons. */
  snr: number;
  seed: number;
  widthPx?: number;
  heightPx?: number;
  frames?: number;
  /** Tracers in sight at once, on average. */
  tracers?: number;
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

/** Background 4-10 electrons, read noise 1.5, 2 counts per electron, spots of 1.2 px. */
export function standardCamera(seed: number): SceneCamera {
  return {
    spotSigmaPx: 1.2,
    backgroundE: 10,
    sheetEdgeLight: 0.45,
    ripple: 0.06,
    readNoiseE: 1.5,
    gainCountsPerE: 2,
    offsetCounts: 100,
    bitDepth: 16,
    seed,
  };
}

/** Photoelectrons of a spot of the given SNR on a background, both in electrons. */
export function brightnessOfSnr(
  snr: number,
  backgroundE: number,
  readNoiseE: number,
  spotSigmaPx: number,
): number {
  const s2 = snr * snr;
  const peak = 0.5 * (s2 + Math.sqrt(s2 * s2 + 4 * s2 * (backgroundE + readNoiseE * readNoiseE)));
  return peak / peakShare(spotSigmaPx);
}

/** Tracers of both kinds that appear, move, blink, leave and meet; 512 x 512, 200 frames, 300 in sight. */
export function standardScene(options: StandardOptions): Scene {
  const { widthPx = 512, heightPx = 512, frames = 200, tracers = 300, snr, seed } = options;
  const builder = new SceneBuilder(widthPx, heightPx, frames);
  const random = createRandom(mixSeed(seed, 1));
  const boxWidth = widthPx + 2 * ROOM_ALONG_PX;
  const boxHeight = heightPx + 2 * ROOM_ACROSS_PX;
  const perFrame =
    (tracers / (LIFE_LEAST_FRAMES + LIFE_MEAN_FRAMES)) * ((boxWidth * boxHeight) / (widthPx * heightPx));
  const births = random.poisson(perFrame * (frames + EARLIER_FRAMES));
  for (let i = 0; i < births; i++) addTracers(createRandom(mixSeed(seed, i + 2)));
  const scene = builder.build(Number.NaN, []);

  const camera = standardCamera(seed);
  const light = sheetLight(camera, widthPx, heightPx);
  for (let p = 0; p < scene.frame.length; p++) {
    const x = Math.min(widthPx - 1, Math.max(0, Math.round(scene.xPx[p])));
    const y = Math.min(heightPx - 1, Math.max(0, Math.round(scene.yPx[p])));
    const background = camera.backgroundE * light[y * widthPx + x];
    scene.brightnessE[p] = brightnessOfSnr(snr, background, camera.readNoiseE, camera.spotSigmaPx);
  }
  return scene;

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
      builder.add(kind, -1, xPx, yPx, visible, 1);
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
