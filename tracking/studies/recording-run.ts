import { createDetector } from '../detect';
import type { Kernels } from '../kernels/kernels';
import { plainKernels } from '../kernels/plain-kernels';
import { linkSpots } from '../link';
import { measureImage, pickModelFrames } from '../measure-image';
import { resolveRecipe } from '../recipe';
import { createRenderer } from '../simulate/render';
import type { Scene, SceneCamera } from '../simulate/scene';
import { createSpotSink } from '../spots';
import type { Frame, ImageModel, Recipe, RecipeRequest, Spots, Tracks } from '../types';

/** Only steps of real time depend on the pixel size; the studies compare pixels. */
const PIXEL_SIZE_M = 1e-5;

/** All that the core makes of a simulated recording. */
export interface RecordingRun {
  model: ImageModel;
  recipe: Recipe;
  spots: Spots;
  tracks: Tracks;
}

/**
 * Renders a scene, measures camera and spots, detects and links; what is not requested is automatic.
 *
 * @param kernels what detection works on all pixels with: the plain ones give the same to rounding
 */
export function runRecording(
  scene: Scene,
  camera: SceneCamera,
  request: RecipeRequest = {},
  kernels: Kernels = plainKernels,
): RecordingRun {
  const { widthPx: width, heightPx: height, frames } = scene;
  const renderer = createRenderer(scene, camera);
  const recorded = Array.from({ length: frames }, (_, index) => renderer.renderFrame(index));
  const frameAt = (index: number): Frame => ({ width, height, counts: Float32Array.from(recorded[index]) });
  const picked = pickModelFrames(frames, width * height, request.effort);
  const model = measureImage(picked.map(frameAt), request, picked, kernels);
  const recipe = resolveRecipe(request, { ...model, frames, pixelSizeM: PIXEL_SIZE_M });
  const detector = createDetector(model, recipe, kernels);
  const sink = createSpotSink();
  const room = frameAt(0);
  for (let f = 0; f < frames; f++) {
    room.counts.set(recorded[f]);
    detector.detect(room, f, sink);
  }
  const spots = sink.spots();
  return { model, recipe, spots, tracks: linkSpots(spots, { frames, width, height }, recipe) };
}
