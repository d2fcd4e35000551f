import type { Advice } from '../assessment';
import type { AdviceFacts } from './facts';
import { about, milliseconds, percent } from './words';

/**
 * A tracer that moves by b while the shutter is open has an image of s^2 + b^2 / 12: 10 % more than
 * s^2 at b = 1.1 s (uniform motion; second moment of a uniform distribution).
 */
const WAY_MOST_SIGMAS = Math.sqrt(0.1 * 12);
/** A way this short leaves room for a longer exposure. */
const WAY_SHORT_SIGMAS = 0.4;
const FOUND_WANTED = 0.95;

type Facts = Pick<AdviceFacts, 'made' | 'blurPx' | 'spotSizePx' | 'assessed'>;

/** Whether the shutter is open too long, or could stay open longer for more light. */
export function exposureAdvice({ made, blurPx, spotSizePx, assessed }: Facts): Advice[] {
  const { exposureS, frameIntervalS } = made;
  // Planted particles have the light of their own; what the exposure of the recording did can't be seen in them.
  if (exposureS === null || assessed.kind === 'planted') return [];
  const most = WAY_MOST_SIGMAS * spotSizePx;
  if (blurPx > most) {
    return [
      {
        about: 'exposure',
        weight: 'change',
        sentence: `Tracers move ${about(blurPx)} px while the shutter is open, with images of ${about(spotSizePx)} px: shorten the exposure to ${milliseconds((exposureS * most) / blurPx)}, with as much light.`,
      },
    ];
  }
  const { found, truePoints, missedCrowded } = assessed.detection;
  // More light doesn't part images that lie over each other.
  if (missedCrowded > 0.5 * (1 - found.value) * truePoints) return [];
  if (found.value >= FOUND_WANTED || blurPx > WAY_SHORT_SIGMAS * spotSizePx) return [];
  const longer = Math.min(frameIntervalS / exposureS, blurPx > 0 ? most / blurPx : Infinity);
  if (!(longer > 1.5)) return [];
  return [
    {
      about: 'exposure',
      weight: 'change',
      sentence: `Only ${percent(found.value)} of the tracer images are found and none is blurred: an exposure of ${milliseconds(exposureS * longer)} gives ${about(longer)} times the light before motion shows.`,
    },
  ];
}
