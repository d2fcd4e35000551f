import { closeSync, openSync, writeSync } from 'node:fs';
import { writeTiff } from '@/jobs/write-tiff';
import { MIXED_SIZES, mixedCamera, mixedScene, type MixedSet } from '@/tracking/simulate/mixed-scene';
import { createRenderer } from '@/tracking/simulate/render';
import type { Scene, SceneCamera } from '@/tracking/simulate/scene';

/** A simulated recording on disk, twice: for the product and for the reference. */
export interface BenchRecording {
  name: string;
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

export interface BenchRecordingOptions {
  set: MixedSet;
  seed: number;
  /** Fewer frames than the set has, for a short bench. */
  frames?: number;
}

/** Renders a recording of tracers of mixed brightness, frame by frame. */
export async function makeRecording(
  folder: string,
  { set, seed, frames = MIXED_SIZES[set].frames }: BenchRecordingOptions,
): Promise<BenchRecording> {
  const scene = mixedScene({ set, seed, frames });
  const camera = mixedCamera(seed);
  const renderer = createRenderer(scene, camera);
  const { widthPx: width, heightPx: height } = scene;
  const tiffPath = `${folder}/${set}.tif`;
  const rawPath = `${folder}/${set}.u16`;
  const raw = openSync(rawPath, 'w');
  try {
    const frame = (index: number) => {
      const counts = renderer.renderFrame(index);
      writeSync(raw, new Uint8Array(counts.buffer, counts.byteOffset, counts.byteLength));
      return counts;
    };
    await writeTiff(tiffPath, { width, height, frames, frame });
  } finally {
    closeSync(raw);
  }
  const megapixels = (frames * width * height) / 1e6;
  return { name: set, scene, camera, width, height, frames, megapixels, tiffPath, rawPath };
}
