import type { Advice } from '../assessment';
import type { AdviceFacts } from './facts';
import { about } from './words';

/** Methods in the words of the page; the prior speaks of the heat flux and takes no part. */
const NAMES: Record<string, string> = {
  crossings: 'crossings',
  'visible-length': 'visible length',
  'beads-per-length': 'beads per length',
  'neighbour-distance': 'neighbour distance',
  'line-velocity': 'line velocity',
  'free-path': 'free path',
  decay: 'decay',
  'marked-chains': 'marked chains',
  combined: 'the combined value',
};

/** Which methods can be relied on here and which can't. */
export function estimateAdvice({ assessed }: Pick<AdviceFacts, 'assessed'>): Advice[] {
  const known = assessed.estimates.filter(({ method, ratio }) => ratio !== null && method in NAMES);
  if (assessed.trueLineDensityM2 === null) return [];
  if (known.length === 0) {
    return [
      {
        about: 'estimates',
        weight: 'change',
        sentence:
          'No method can be used to estimate the line density in this plan; each says why in the table.',
      },
    ];
  }
  const advice: Advice[] = [];
  // The visible length is a lower limit by its nature: below the truth it keeps its promise.
  const off = known.filter(
    ({ method, coversTruth, ratio }) =>
      coversTruth === false && !(method === 'visible-length' && ratio !== null && ratio < 1),
  );
  if (off.length > 0) {
    const words = off.map(({ method, ratio }) => `${NAMES[method]} (${about(ratio!)} times the truth)`);
    advice.push({
      about: 'estimates',
      weight: 'change',
      sentence: `The interval misses the true line density by ${listOf(words)}: don't rest on ${off.length > 1 ? 'these methods' : 'this method'} under these conditions.`,
    });
  }
  const good = known.filter(({ coversTruth }) => coversTruth === true);
  if (good.length > 0) {
    advice.push({
      about: 'estimates',
      weight: 'know',
      sentence: `The true line density lies in the interval of ${listOf(good.map(({ method }) => NAMES[method]))}.`,
    });
  }
  return advice;
}

const listOf = (words: readonly string[]): string =>
  words.length > 1 ? `${words.slice(0, -1).join(', ')} and ${words[words.length - 1]}` : words[0];
