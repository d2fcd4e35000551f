import { peakShare } from '../pixel-gaussian';
import { livingTracers } from './living-tracers';
import type { Scene, SceneCamera } from './scene';
import { sheetLight } from './sheet-light';

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
  const scene = livingTracers({ widthPx, heightPx, frames, tracers, seed, brightnessE: () => 1 });
  giveAllTheSameSnr(scene, standardCamera(seed), snr);
  return scene;
}

/** Sets every spot's brightness so that it has the given SNR on the background where it stands. */
export function giveAllTheSameSnr(scene: Scene, camera: SceneCamera, snr: number): void {
  const { widthPx, heightPx } = scene;
  const light = sheetLight(camera, widthPx, heightPx);
  for (let p = 0; p < scene.frame.length; p++) {
    const x = Math.min(widthPx - 1, Math.max(0, Math.round(scene.xPx[p])));
    const y = Math.min(heightPx - 1, Math.max(0, Math.round(scene.yPx[p])));
    const background = camera.backgroundE * light[y * widthPx + x];
    scene.brightnessE[p] = brightnessOfSnr(snr, background, camera.readNoiseE, camera.spotSigmaPx);
  }
}
