import { openStack, type StackReader } from '@/stacks/open-stack';
import { createDetector } from '@/tracking/detect';
import { linkSpots } from '@/tracking/link';
import { concatSpots, createSpotSink } from '@/tracking/spots';
import { resolveRecipe } from '@/tracking/recipe';
import type { ImageModel, Spots } from '@/tracking/types';
import { kernelsOfThisProcess } from '../kernels';
import type { TryRecipeInput, TryRecipeOutput } from '../tasks';
import { appendTracks } from './append-tracks';
import { frameNoise } from './frame-noise';
import { imageFacts, modelOf } from './measure-image';
import type { WorkContext } from './work-context';

/** Two positions are enough to see where a spot goes; the recipe's own bound is for whole recordings. */
const SHORTEST_TRIED_TRACK = 2;

let last: { key: string; model: ImageModel } | null = null;

/** Spots of a few frames and short tracks where the frames follow each other. */
export async function tryRecipe(input: TryRecipeInput, context: WorkContext): Promise<TryRecipeOutput> {
  const { request, conditions } = input;
  const stack = await openStack(input.stackDir);
  try {
    const model = await measuredModel(stack, input, context);
    const image = { frames: stack.frames, width: stack.width, height: stack.height };
    const recipe = resolveRecipe(request, { ...model, ...image, pixelSizeM: conditions.pixelSize_m });
    const detector = createDetector(model, recipe, kernelsOfThisProcess());
    const frames: TryRecipeOutput['frames'] = [];
    for (const frame of Array.from(new Set(input.frames)).sort((a, b) => a - b)) {
      const picture = await stack.readFrame(frame);
      const sink = createSpotSink();
      detector.detect(picture, frame, sink);
      frames.push({ frame, noiseE: frameNoise(picture) / recipe.gain, spots: sink.spots() });
      context.onProgress(0.5 + (0.4 * frames.length) / input.frames.length);
    }
    const short = {
      ...recipe,
      shortestTrackFrames: Math.min(recipe.shortestTrackFrames, SHORTEST_TRIED_TRACK),
    };
    const runs = consecutiveRuns(frames).filter((run) => run.length > 1);
    const tracks = appendTracks(runs.map((run) => linkSpots(concatSpots(run), image, short)));
    return { recipe, facts: imageFacts(model), frames, tracks };
  } finally {
    await stack.close();
  }
}

// The measured image is the slow part, and most tries change fields that it doesn't depend on.
async function measuredModel(
  stack: StackReader,
  { stackDir, request, conditions }: TryRecipeInput,
  context: WorkContext,
): Promise<ImageModel> {
  const { gain, readNoise_e, spotSizePx, effort } = request;
  const key = JSON.stringify([stackDir, gain, readNoise_e, spotSizePx, effort]);
  if (last?.key !== key) {
    last = { key, model: (await modelOf(stack, request, conditions.pixelSize_m, context)).model };
  }
  return last.model;
}

function consecutiveRuns(frames: readonly { frame: number; spots: Spots }[]): Spots[][] {
  const runs: Spots[][] = [];
  frames.forEach(({ frame, spots }, i) => {
    if (i > 0 && frames[i - 1].frame === frame - 1) runs.at(-1)!.push(spots);
    else runs.push([spots]);
  });
  return runs;
}
