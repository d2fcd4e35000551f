import type { Advice } from '../assessment';
import { estimateAdvice } from './estimates';
import { exposureAdvice } from './exposure';
import type { AdviceFacts } from './facts';
import { frameRateAdvice, lagAdvice } from './frame-rate';
import { lightAdvice } from './light';
import { lightSheetAdvice } from './light-sheet';
import { errorAdvice, eventAdvice, populationAdvice, recipeAdvice } from './recovery';
import { crowdingAdvice, loadedLinesAdvice, thinSeedingAdvice } from './seeding';

const RULES: readonly ((facts: AdviceFacts) => Advice[])[] = [
  frameRateAdvice,
  crowdingAdvice,
  thinSeedingAdvice,
  exposureAdvice,
  lightAdvice,
  lightSheetAdvice,
  recipeAdvice,
  populationAdvice,
  eventAdvice,
  estimateAdvice,
  errorAdvice,
  lagAdvice,
  loadedLinesAdvice,
];

/** All that follows from the numbers, what stands in the way first. */
export function advise(facts: AdviceFacts): Advice[] {
  const all = RULES.flatMap((rule) => rule(facts));
  return [
    ...all.filter(({ weight }) => weight === 'change'),
    ...all.filter(({ weight }) => weight === 'know'),
  ];
}
