import type { StackReader } from '@/stacks/open-stack';
import { measuredTracks } from '@/tracking/assess/measured-tracks';
import { createDetector } from '@/tracking/detect';
import { levelForFalseMaxima } from '@/tracking/detection/threshold';
import type { Kernels } from '@/tracking/kernels/kernels';
import { linkSpots } from '@/tracking/link';
import { measureImage, pickModelFrames } from '@/tracking/measure-image';
import { resolveRecipe } from '@/tracking/recipe';
import { createSpotSink } from '@/tracking/spots';
import type { Frame, ImageModel, Recipe, Tracks } from '@/tracking/types';
import { cpuSeconds } from './cpu-seconds';
import type { PipelineRun } from './pipeline-run';

const PIXEL_SIZE_M = 1e-5;

/** The core on one thread, every setting automatic but the effort; frames come from the indexed stack. */
export async function runCore(
  stack: StackReader,
  effort: Recipe['effort'],
  kernels: Kernels,
): Promise<PipelineRun> {
  const { width, height, frames } = stack;
  const room: Frame = { width, height, counts: new Float32Array(width * height) };
  const reading = await cpuSeconds(async () => {
    for (let f = 0; f < frames; f++) await stack.readFrame(f, room);
  });

  const numbers = pickModelFrames(frames, width * height, effort);
  const picked: Frame[] = [];
  for (const f of numbers) picked.push(await stack.readFrame(f));
  let model!: ImageModel;
  const measuring = await cpuSeconds(() => {
    model = measureImage(picked, { effort }, numbers, kernels);
  });
  const recipe = resolveRecipe({ effort }, { ...model, frames, pixelSizeM: PIXEL_SIZE_M });
  const search = await searchSeconds(kernels, model, recipe, picked);

  const detector = createDetector(model, recipe, kernels);
  const sink = createSpotSink();
  const throughReading = await cpuSeconds(async () => {
    for (let f = 0; f < frames; f++) {
      await stack.readFrame(f, room);
      detector.detect(room, f, sink);
    }
  });
  const spots = sink.spots();
  let tracks!: Tracks;
  const linking = await cpuSeconds(() => {
    tracks = linkSpots(spots, { frames, width, height }, recipe);
  });
  return {
    name: `${effort} effort, ${kernels.name}`,
    seconds: {
      reading,
      measuring,
      search: (search * frames) / picked.length,
      detection: Math.max(0, throughReading - reading),
      linking,
      whole: measuring + throughReading + linking,
    },
    spots: spots.count,
    links: tracks.frame.length - tracks.count,
    peakMB: Number.NaN,
    points: measuredTracks(tracks),
  };
}

/** Only filter and maxima, on the frames at hand. */
function searchSeconds(
  kernels: Kernels,
  model: ImageModel,
  recipe: Recipe,
  picked: readonly Frame[],
): Promise<number> {
  const { width, height, offsetCounts, saturationCounts } = model;
  const spotSigmaPx = recipe.spotSizePx;
  const images = kernels.forImages({ width, height, spotSigmaPx });
  images.bad.set(model.badPixels);
  images.background.set(model.backgroundE);
  const level = levelForFalseMaxima(recipe.falseSpotsPerFrame, spotSigmaPx, width * height);
  return cpuSeconds(() => {
    for (const { counts } of picked) {
      images.setFrame(counts, { offsetCounts, perCount: 1 / recipe.gain, saturationCounts });
      images.respond({ scale: 1, shift: 0 }, recipe.readNoise_e ** 2, level);
      images.findPeaks(level);
    }
  });
}
