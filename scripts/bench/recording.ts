import { open } from 'node:fs/promises';
import { writeTiff } from '@/jobs/demo/write-tiff';
import { createRenderer } from '@/tracking/simulate/render';
import type { Scene, SceneCamera } from '@/tracking/simulate/scene';
import { standardCamera, standardScene } from '@/tracking/simulate/standard-scene';

/** A simulated recording on disk, twice: for the product and for the reference. */
export interface BenchRecording {
  scene: Scene;
  camera: SceneCamera;
  width: number;
  height: number;
  frames: number;
  megapixels: number;
  tiffPath: string;
  /** The same frames without any header, 16-bit little-endian. */
  rawPath: string;
}

/** Renders the standard recording: 512 x 512 px, about 300 tracers in sight. */
export async function makeRecording(
  folder: string,
  options: { snr: number; seed: number; frames: number },
): Promise<BenchRecording> {
  const scene = standardScene(options);
  const camera = standardCamera(options.seed);
  const renderer = createRenderer(scene, camera);
  const { widthPx: width, heightPx: height, frames } = scene;
  const tiffPath = `${folder}/standard.tif`;
  const rawPath = `${folder}/standard.u16`;
  const raw = await open(rawPath, 'w');
  const all = Array.from({ length: frames }, (_, index) => renderer.renderFrame(index));
  for (const counts of all)
    await raw.write(new Uint8Array(counts.buffer, counts.byteOffset, counts.byteLength));
  await raw.close();
  await writeTiff(tiffPath, { width, height, frames, frame: (index) => all[index] });
  return {
    scene,
    camera,
    width,
    height,
    frames,
    megapixels: (frames * width * height) / 1e6,
    tiffPath,
    rawPath,
  };
}
