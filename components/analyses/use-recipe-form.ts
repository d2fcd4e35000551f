'use client';

import { useState } from 'react';
import { ApiError } from '@/components/data/api-client';
import type { Recipe, RecipeRequest } from '@/tracking/types';
import { readRecipe, recipeTexts, type RecipeErrors } from './recipe-form-values';

/** The fields of a recipe with what is wrong in them: found here at once, or said by the server. */
export function useRecipeForm(initial: RecipeRequest = {}) {
  const [texts, setTexts] = useState(() => recipeTexts(initial));
  const [refused, setRefused] = useState<RecipeErrors>({});
  const { recipe, errors } = readRecipe(texts);
  return {
    texts,
    /** Null while a field can't be read. */
    recipe,
    errors: { ...refused, ...errors },
    setText: (field: keyof Recipe, text: string) => {
      setTexts({ ...texts, [field]: text });
      setRefused({ ...refused, [field]: undefined });
    },
    reset: (next: RecipeRequest = {}) => {
      setTexts(recipeTexts(next));
      setRefused({});
    },
    /** Puts what the server refused at its fields. Returns the sentence that belongs to none of them. */
    refuse: (error: Error): string | null => {
      if (!(error instanceof ApiError) || error.errors.length === 0) return error.message;
      const found: RecipeErrors = {};
      for (const { path, message } of error.errors) {
        found[path.replace(/^recipe\./, '').split('.')[0] as keyof Recipe] = message;
      }
      setRefused(found);
      return Object.keys(found).some((field) => field in texts) ? null : error.message;
    },
  };
}
