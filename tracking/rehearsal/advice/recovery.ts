import type { Advice } from '../assessment';
import type { AdviceFacts } from './facts';
import { about, percent } from './words';

// What the recipe itself does well or badly: nothing of it is mended by other light or another camera.

/** False spots may exceed what was asked for by this factor before it is said (Poisson scatter is far smaller). */
const FALSE_FACTOR = 3;
const FALSE_LEAST_PER_FRAME = 0.5;
const OVERSTATED = 1.15;
const ACCURACY_WANTED = 0.9;
const UNDECIDED_MOST = 0.25;
const EFFICIENCY_WANTED = 0.6;
const PURITY_WANTED = 0.8;
/** A meeting is accepted with at least so many points on a side. */
const EVENT_POINTS = 8;

/** Steps that the recipe forbids, and spots that are nothing. */
export function recipeAdvice({
  longStepPx,
  recipe,
  assessed,
}: Pick<AdviceFacts, 'longStepPx' | 'recipe' | 'assessed'>): Advice[] {
  // prettier-ignore
  const advice: Advice[] = [];
  if (longStepPx > recipe.longestStepPx) {
    advice.push({
      about: 'recipe',
      weight: 'change',
      sentence: `One step in a hundred is longer than ${about(longStepPx)} px and the recipe allows ${about(recipe.longestStepPx)} px: raise the longest step, or record faster.`,
    });
  }
  const { falsePerFrame, falseAskedPerFrame } = assessed.detection;
  if (
    falsePerFrame !== null &&
    falsePerFrame > Math.max(FALSE_LEAST_PER_FRAME, FALSE_FACTOR * falseAskedPerFrame)
  ) {
    // prettier-ignore
    advice.push({
      about: 'recipe',
      weight: 'change',
      sentence: `${about(falsePerFrame)} false spots in a frame where ${about(falseAskedPerFrame)} were asked for: ask for fewer, or for longer tracks.`,
    });
  }
  return advice;
}

/** Standard errors that promise too much. */
export function errorAdvice({ assessed }: Pick<AdviceFacts, 'assessed'>): Advice[] {
  const ratio = assessed.detection.errorOverStated;
  if (ratio === null || ratio <= OVERSTATED) return [];
  return [
    {
      about: 'errors',
      weight: 'know',
      sentence: `Positions of isolated tracers are off by ${about(ratio)} times their stated errors: read stated errors as that much larger.`,
    },
  ];
}

/** Populations that are mixed up, or left open. */
export function populationAdvice({ assessed }: Pick<AdviceFacts, 'assessed'>): Advice[] {
  const { balancedAccuracy, undecidedShare } = assessed.populations;
  const advice: Advice[] = [];
  if (balancedAccuracy !== null && balancedAccuracy < ACCURACY_WANTED) {
    advice.push({
      about: 'populations',
      weight: 'change',
      sentence: `Of decided tracks ${percent(balancedAccuracy)} are named rightly (mean of both kinds): longer tracks, or a heat flux that moves the two kinds apart, tell them better.`,
    });
  }
  if (undecidedShare !== null && undecidedShare > UNDECIDED_MOST) {
    advice.push({
      about: 'populations',
      weight: 'know',
      sentence: `${percent(undecidedShare)} of the tracks that follow a tracer are left undecided: only longer tracks or larger differences of velocity decide them.`,
    });
  }
  return advice;
}

/** Meetings that are missed, and accepted ones that are none. */
export function eventAdvice({ assessed }: Pick<AdviceFacts, 'assessed'>): Advice[] {
  const { events, efficiency, purity, accepted } = assessed.events;
  const advice: Advice[] = [];
  if (efficiency !== null && efficiency.value < EFFICIENCY_WANTED) {
    const missed = events.filter(({ outcome }) => outcome !== 'found');
    const short = missed.filter((event) => Math.min(event.pointsBefore, event.pointsAfter) < EVENT_POINTS);
    const why =
      2 * short.length >= missed.length
        ? `most of the others are seen for fewer than ${EVENT_POINTS} frames on a side: record faster or over a larger image`
        : 'the others are long enough: noise of the positions or crowding hides them, so more light helps';
    advice.push({
      about: 'events',
      weight: 'change',
      sentence: `${events.length - missed.length} of ${events.length} meetings are found; ${why}.`,
    });
  }
  if (purity !== null && accepted >= 5 && purity.value < PURITY_WANTED) {
    advice.push({
      about: 'events',
      weight: 'know',
      sentence: `${percent(1 - purity.value)} of the accepted candidates are none: have people read them before they are counted.`,
    });
  }
  return advice;
}
