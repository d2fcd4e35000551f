import { describe, expect, it } from 'vitest';
import { readRecipe, recipeTexts } from '@/components/analyses/recipe-form-values';
import { RECIPE_WORDS } from '@/components/analyses/recipe-words';
import { RECIPE_LIMITS } from '@/tracking/recipe';
import type { RecipeRequest } from '@/tracking/types';

const empty = recipeTexts({});

describe('the fields of a recipe', () => {
  it('name every setting that an analysis has', () => {
    const named = RECIPE_WORDS.map(({ field }) => field).sort();
    expect(named).toEqual([...Object.keys(RECIPE_LIMITS), 'effort', 'lagsFrames'].sort());
  });

  it('leave to the machine what is empty or says auto', () => {
    expect(readRecipe({ ...empty, spotSizePx: ' auto ' })).toEqual({ recipe: {}, errors: {} });
  });

  it('give back the recipe that they were filled from', () => {
    const recipe: RecipeRequest = {
      spotSizePx: 1.2,
      lagsFrames: [1, 3, 9],
      effort: 'quick',
      closestApproach_m: 3.15e-5,
      mayVanishFrames: 0,
    };
    expect(readRecipe(recipeTexts(recipe)).recipe).toEqual(recipe);
  });

  it('show lengths in micrometres and store metres', () => {
    expect(recipeTexts({ closestApproach_m: 25e-6 }).closestApproach_m).toBe('25');
    expect(readRecipe({ ...empty, closestApproach_m: '25' }).recipe).toEqual({ closestApproach_m: 25e-6 });
  });

  it.each([
    ['spotSizePx', '0.1', 'from 0.4 to 10 px'],
    ['mayVanishFrames', '1.5', 'a whole number'],
    ['gain', '1,5', "you typed '1,5'"],
    ['trappedFrom', '', null],
    ['lagsFrames', '1, 0', 'whole numbers from 1'],
    ['lagsFrames', '2, 2', 'different'],
    ['seed', 'NaN', "you typed 'NaN'"],
    ['effort', 'utmost', 'full or quick'],
  ] as const)('say about %s = %j what is allowed', (field, text, words) => {
    const { recipe, errors } = readRecipe({ ...empty, [field]: text });
    if (words === null) {
      expect(recipe).toEqual({});
    } else {
      expect(recipe).toBeNull();
      expect(errors[field]).toContain(words);
    }
  });
});
