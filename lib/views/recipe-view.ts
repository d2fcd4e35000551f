import { z } from 'zod';
import { recipeRequestSchema } from '../schemas/recipe';
import { itemFields, personSchema } from './common';

/** One version of a saved recipe. */
export const recipeViewSchema = z.object({
  ...itemFields,
  name: z.string(),
  version: z.int(),
  note: z.string().nullable(),
  fields: recipeRequestSchema,
  createdBy: personSchema.nullable(),
});
export type RecipeView = z.infer<typeof recipeViewSchema>;
