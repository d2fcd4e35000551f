import type { ImageFacts } from '@/lib/analysis-facts';
import { openStack, type StackReader } from '@/stacks/open-stack';
import { spotSizes } from '@/tracking/detection/spot-sizes';
import { measureImage as measure, pickModelFrames } from '@/tracking/measure-image';
import { resolveRecipe } from '@/tracking/recipe';
import type { Frame, ImageModel, Recipe, RecipeRequest } from '@/tracking/types';
import { kernelsOfThisProcess } from '../kernels';
import { encodeImageModel } from '../encode-image-model';
import type { MeasureImageInput, MeasureImageOutput } from '../tasks';
import type { WorkContext } from './work-context';

/** Camera, background and spot size from frames spread over the whole stack, and the recipe with every value. */
export async function measureImage(
  input: MeasureImageInput,
  context: WorkContext,
): Promise<MeasureImageOutput> {
  const stack = await openStack(input.stackDir);
  try {
    const { model, recipe } = await modelOf(stack, input.request, input.pixelSizeM, context);
    return { model: encodeImageModel(model), facts: imageFacts(model), recipe };
  } finally {
    await stack.close();
  }
}

/** The image model of an open stack. */
export async function modelOf(
  stack: StackReader,
  request: RecipeRequest,
  pixelSizeM: number,
  { onProgress }: WorkContext,
): Promise<{ model: ImageModel; recipe: Recipe }> {
  const picked = pickModelFrames(stack.frames, stack.width * stack.height, request.effort);
  const frames: Frame[] = [];
  for (const frame of picked) {
    frames.push(await stack.readFrame(frame));
    onProgress((0.5 * frames.length) / picked.length);
  }
  const model = measure(frames, request, picked, kernelsOfThisProcess());
  return { model, recipe: resolveRecipe(request, { ...model, frames: stack.frames, pixelSizeM }) };
}

/** What people are told of an image model. */
export function imageFacts(model: ImageModel): ImageFacts {
  const { gainCountsPerE, offsetCounts, readNoiseE, spotSigmaPx, spotSigmaSpreadPx = 0 } = model;
  const several = spotSizes(spotSigmaPx, spotSigmaSpreadPx).sigmaPx.length > 1;
  let badPixels = 0;
  for (const bad of model.badPixels) badPixels += bad;
  const facts = { gainCountsPerE, offsetCounts, readNoiseE, spotSigmaPx, badPixels };
  return several ? { ...facts, spotSigmaSpreadPx } : facts;
}
