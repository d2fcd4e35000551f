import { recipeRequestSchema } from '@/lib/schemas/recipe';
import { RECIPE_LIMITS, type NumericRecipeField } from '@/tracking/recipe';
import type { Recipe, RecipeRequest } from '@/tracking/types';
import { recipeValueText, RECIPE_WORDS, type RecipeWord } from './recipe-words';

/** What stands in each field; empty means that the machine decides. */
export type RecipeTexts = Record<keyof Recipe, string>;

export type RecipeErrors = Partial<Record<keyof Recipe, string>>;

/** Fields for a recipe: what it leaves to the machine stays empty. */
export function recipeTexts(recipe: RecipeRequest): RecipeTexts {
  const texts = {} as RecipeTexts;
  for (const word of RECIPE_WORDS) {
    const text = recipeValueText(word, recipe[word.field]);
    texts[word.field] = text === 'auto' ? '' : text;
  }
  return texts;
}

/**
 * The recipe that stands in the fields, or a sentence for each field that can't be read or is out
 * of bounds. Empty fields are left out: the machine decides.
 */
export function readRecipe(texts: RecipeTexts): { recipe: RecipeRequest | null; errors: RecipeErrors } {
  const errors: RecipeErrors = {};
  const recipe: Record<string, unknown> = {};
  for (const word of RECIPE_WORDS) {
    const text = texts[word.field].trim();
    if (text === '' || text.toLowerCase() === 'auto') continue;
    const { value, error } = readValue(word, text);
    if (error) errors[word.field] = error;
    else recipe[word.field] = value;
  }
  if (Object.keys(errors).length > 0) return { recipe: null, errors };
  const parsed = recipeRequestSchema.safeParse(recipe);
  if (parsed.success) return { recipe: parsed.data as RecipeRequest, errors };
  for (const issue of parsed.error.issues) {
    const field = String(issue.path[0]) as keyof Recipe;
    errors[field] ??= issue.message;
  }
  return { recipe: null, errors };
}

function readValue(word: RecipeWord, text: string): { value?: unknown; error?: string } {
  if (word.field === 'effort') return { value: text.toLowerCase() };
  if (word.field === 'lagsFrames') {
    const lags = text.split(/[\s,;]+/).filter(Boolean).map(Number); // prettier-ignore
    if (lags.every((lag) => Number.isInteger(lag) && lag >= 1 && lag <= 1000)) return { value: lags };
    return { error: `Enter whole numbers from 1 to 1000 with commas between them (you typed '${text}').` };
  }
  const number = numberOf(text);
  const { least, most, whole } = RECIPE_LIMITS[word.field as NumericRecipeField];
  const per = word.perShown ?? 1;
  const value = number === null ? NaN : per === 1 ? number : Number((number * per).toPrecision(12));
  if (number === null || value < least || value > most || (whole && !Number.isInteger(value))) {
    const unit = word.unit ? ` ${word.unit}` : '';
    const kind = whole ? 'a whole number' : 'a number';
    return {
      error: `${word.label} must be ${kind} from ${plain(least / per)} to ${plain(most / per)}${unit} (you typed '${text}').`,
    };
  }
  return { value };
}

/** Point decimals only: a comma could mean thousands as well as tenths, so it is asked about. */
function numberOf(text: string): number | null {
  return /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(text) ? Number(text) : null;
}

const plain = (value: number) => String(Number(value.toPrecision(6)));
