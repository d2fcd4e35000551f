import { expect, test } from 'vitest';
import { checkRecipe, RECIPE_LIMITS, resolveRecipe, type NumericRecipeField } from '@/tracking/recipe';
import type { RecipeRequest } from '@/tracking/types';

const MEASURED = {
  spotSigmaPx: 1.3,
  gainCountsPerE: 2.1,
  readNoiseE: 1.4,
  width: 256,
  height: 128,
  frames: 40,
  pixelSizeM: 1e-5,
};

test('what is left open is filled in from the recording, what is given is kept', () => {
  const recipe = resolveRecipe({ gain: 3, lagsFrames: [2], seed: 'auto' }, MEASURED);
  expect(recipe).toMatchObject({ spotSizePx: 1.3, gain: 3, readNoise_e: 1.4, lagsFrames: [2], seed: 1 });
  expect(Object.values(recipe).every((value) => value !== undefined && value !== 'auto')).toBe(true);
});

test('filling in twice changes nothing', () => {
  const once = resolveRecipe({}, MEASURED);
  expect(resolveRecipe(once, MEASURED)).toEqual(once);
});

test('a recording of one frame still gets a recipe that passes its own check', () => {
  const tiny = { ...MEASURED, frames: 1, width: 16, height: 16, spotSigmaPx: Number.NaN };
  const recipe = resolveRecipe({}, tiny);
  expect(() => checkRecipe(recipe, tiny)).not.toThrow();
});

test.each(Object.keys(RECIPE_LIMITS) as NumericRecipeField[])(
  '%s outside its limits is refused by name',
  (field) => {
    const { least, most } = RECIPE_LIMITS[field];
    for (const value of [least - 1e-6 - Math.abs(least), most * 1.001 + 1, Number.NaN]) {
      expect(() => resolveRecipe({ [field]: value }, MEASURED)).toThrow(RangeError);
      expect(() => resolveRecipe({ [field]: value }, MEASURED)).toThrow(
        new RegExp(`^${field} must be .*${least}`),
      );
    }
  },
);

test.each<[RecipeRequest, string]>([
  [{ longestStepPx: 300 }, 'longestStepPx must be at most 256, the longer side of the image. Received 300.'],
  [{ shortestTrackFrames: 41 }, 'shortestTrackFrames must be at most 40'],
  [{ lagsFrames: [1, 40] }, 'lagsFrames must be at most 39 each'],
  [{ lagsFrames: [] }, 'lagsFrames must be a list'],
  [{ lagsFrames: [2, 2] }, 'lagsFrames must be a list'],
  [{ spotSizePx: 9 }, 'spotSizePx must be at most 8, an eighth'],
  [{ mayVanishFrames: 1.5 }, 'mayVanishFrames must be a whole number from 0 to 10. Received 1.5.'],
  [{ effort: 'slow' as 'quick' }, 'effort must be full or quick. Received "slow".'],
])('%j is impossible for the recording and says so', (request, sentence) => {
  const recording = { ...MEASURED, height: 64 };

  expect(() => checkRecipe(request, recording)).toThrow(sentence);
});
