import { createRandom, mixSeed } from '@/tracking/random';
import { createRenderer } from '@/tracking/simulate/render';
import type { Scene, SceneCamera } from '@/tracking/simulate/scene';
import { sheetLight } from '@/tracking/simulate/sheet-light';
import type { Frame } from '@/tracking/types';

/** Light of the sheet at a time, relative, by pixel. */
export type LightAt = (frame: number) => Float32Array;

/**
 * A sheet whose brightest row moves by `shift` of the image's height from the first frame to the
 * last, while its ripples move by a third of a ripple and its brightness as a whole flickers.
 */
export function movingSheet(
  camera: Pick<SceneCamera, 'sheetEdgeLight' | 'ripple'>,
  width: number,
  height: number,
  frames: number,
  shift: number,
  flicker = 0,
): LightAt {
  const fall = Math.log(1 / camera.sheetEdgeLight);
  return (frame) => {
    const time = frames > 1 ? frame / (frames - 1) : 0;
    const level = 1 + flicker * Math.sin(2.7 * frame);
    const light = new Float32Array(width * height);
    for (let y = 0; y < height; y++) {
      const fromMiddle = (2 * (y + 0.5)) / height - 1 - 2 * shift * (time - 0.5);
      const across = Math.exp(-fall * fromMiddle * fromMiddle);
      for (let x = 0; x < width; x++) {
        const ripple = 1 + camera.ripple * Math.cos(2 * Math.PI * ((3 * (x + 0.5)) / width - time / 3));
        light[y * width + x] = (level * across * ripple) / (1 + camera.ripple);
      }
    }
    return light;
  };
}

/** Frames of a scene under a changing sheet, and the background of each, electrons. */
export function driftingRecording(scene: Scene, camera: SceneCamera, lightAt: LightAt) {
  const { widthPx: width, heightPx: height } = scene;
  const renderer = createRenderer(scene, camera);
  const still = sheetLight(camera, width, height);
  const background = (frame: number) => lightAt(frame).map((light) => camera.backgroundE * light);
  const render = (frame: number): Frame => {
    const expected = renderer.expected(frame);
    const light = background(frame);
    const random = createRandom(mixSeed(camera.seed + 1, frame));
    const most = 2 ** camera.bitDepth - 1;
    const counts = new Float32Array(width * height);
    for (let i = 0; i < counts.length; i++) {
      const mean = Math.max(0, expected[i] - camera.backgroundE * still[i]) + light[i];
      const e = random.poisson(mean) + camera.readNoiseE * random.normal();
      const count = Math.round(camera.offsetCounts + camera.gainCountsPerE * e);
      counts[i] = Math.min(most, Math.max(0, count));
    }
    return { width, height, counts };
  };
  return { background, render };
}
