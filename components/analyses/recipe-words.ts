import { RECIPE_DEFAULTS } from '@/tracking/recipe';
import type { Recipe } from '@/tracking/types';

/** How a field of a recipe is named, in which unit it is shown, and what it does. */
export interface RecipeWord {
  field: keyof Recipe;
  label: string;
  unit?: string;
  /** How many of the stored unit one shown unit is: 1e-6 shows metres as micrometres. */
  perShown?: number;
  help: string;
}

export interface RecipeGroup {
  title: string;
  words: readonly RecipeWord[];
}

const { falseSpotsPerFrame, longestStepPx, mayVanishFrames, shortestTrackFrames } = RECIPE_DEFAULTS;
const { trappedFrom, falseDiscoveryRate, bootstrapDraws, seed, lagsFrames } = RECIPE_DEFAULTS;

/** The fields of a recipe in the order in which the machine uses them. */
export const RECIPE_GROUPS: readonly RecipeGroup[] = [
  {
    title: 'Spots',
    words: [
      {
        field: 'spotSizePx',
        label: 'Spot size',
        unit: 'px',
        help: 'Standard deviation of a tracer’s image. Auto measures it.',
      },
      {
        field: 'falseSpotsPerFrame',
        label: 'False spots per frame',
        help: `Fewer finds less, more finds more. Auto: ${falseSpotsPerFrame}.`,
      },
      {
        field: 'gain',
        label: 'Gain',
        unit: 'counts/e',
        help: 'Camera counts per photoelectron. Auto measures it.',
      },
      {
        field: 'readNoise_e',
        label: 'Read noise',
        unit: 'e',
        help: 'Electrons r.m.s. at no light. Auto measures it.',
      },
      { field: 'effort', label: 'Effort', help: 'Quick fits positions more coarsely. Auto: full.' },
    ],
  },
  {
    title: 'Tracks',
    words: [
      {
        field: 'longestStepPx',
        label: 'Longest step',
        unit: 'px',
        help: `From one frame to the next. Auto: ${longestStepPx}.`,
      },
      {
        field: 'mayVanishFrames',
        label: 'May vanish for',
        unit: 'frames',
        help: `A gap this long is bridged. Auto: ${mayVanishFrames}.`,
      },
      {
        field: 'shortestTrackFrames',
        label: 'Shortest track',
        unit: 'frames',
        help: `Shorter ones are dropped. Auto: ${shortestTrackFrames}.`,
      },
    ],
  },
  {
    title: 'Flow',
    words: [
      {
        field: 'lagsFrames',
        label: 'Lags',
        unit: 'frames',
        help: `Velocities over these, the first one first. Auto: ${lagsFrames.join(', ')}.`,
      },
      {
        field: 'trappedFrom',
        label: 'Trapped from',
        help: `Least probability to be called trapped. Auto: ${trappedFrom}.`,
      },
      {
        field: 'closestApproach_m',
        label: 'Closest approach',
        unit: 'µm',
        perShown: 1e-6,
        help: 'Pairs that come nearer are candidates. Auto: 4 spot sizes.',
      },
      {
        field: 'falseDiscoveryRate',
        label: 'False discoveries',
        help: `Share of false ones among accepted candidates. Auto: ${falseDiscoveryRate}.`,
      },
      {
        field: 'bootstrapDraws',
        label: 'Bootstrap draws',
        help: `For intervals. Auto: ${bootstrapDraws}.`,
      },
      { field: 'seed', label: 'Seed', help: `Of all chance. Auto: ${seed}.` },
    ],
  },
];

export const RECIPE_WORDS: readonly RecipeWord[] = RECIPE_GROUPS.flatMap(({ words }) => words);

/** A value of a recipe as it is shown, in the field's unit. */
export function recipeValueText(word: RecipeWord, value: Recipe[keyof Recipe] | 'auto' | undefined): string {
  if (value === undefined || value === 'auto') return 'auto';
  if (Array.isArray(value)) return value.join(', ');
  if (typeof value === 'string') return value;
  const shown = value / (word.perShown ?? 1);
  return String(Number(shown.toPrecision(6)));
}
