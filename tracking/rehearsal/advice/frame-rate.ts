import type { Advice } from '../assessment';
import type { AdviceFacts } from './facts';
import { about, percent } from './words';

/**
 * Mean step over mean distance to the nearest tracer: comfortable below 0.3, unreliable above 0.5
 * (Malik, Dracos & Papantoniou 1993; Ouellette, Xu & Bodenschatz 2006; values from memory).
 */
const COMFORTABLE = 0.3;
const UNRELIABLE = 0.5;
/** Links that go wrong more often than this spoil velocities and events (common practice, no source). */
const WRONG_LINKS_MOST = 0.02;
/** Noise may make up this part of the variance of a velocity. */
const NOISE_MOST = 0.2;

type Facts = Pick<AdviceFacts, 'meanStepPx' | 'neighbourPx' | 'made' | 'trappedStepPx' | 'assessed'>;

/** Whether tracers go too far between frames to be told apart. */
export function frameRateAdvice({ meanStepPx, neighbourPx, made, assessed }: Facts): Advice[] {
  const wrong = assessed.tracks.wrongLinkShare ?? 0;
  const framesPerS = 1 / made.frameIntervalS;
  if (neighbourPx !== null && meanStepPx > COMFORTABLE * neighbourPx) {
    const reach = meanStepPx / neighbourPx;
    const factor = reach / COMFORTABLE;
    return [
      {
        about: 'frame rate',
        weight: reach > UNRELIABLE || wrong > WRONG_LINKS_MOST ? 'change' : 'know',
        sentence:
          `A tracer moves ${about(meanStepPx)} px from frame to frame, ${about(reach)} of the way to its nearest neighbour, and ${percent(wrong)} of the links join different tracers: ` +
          `record ${about(factor)} times as fast (${about(framesPerS * factor)} frames/s), or seed more thinly.`,
      },
    ];
  }
  if (wrong <= WRONG_LINKS_MOST) return [];
  return [
    {
      about: 'frame rate',
      weight: 'change',
      sentence: `${percent(wrong)} of the links join different tracers although steps are short: meetings and misses are to blame, so more light or thinner seeding helps more than a higher frame rate.`,
    },
  ];
}

/**
 * Whether a trapped tracer moves less in a frame than its position is uncertain: the velocity at
 * lag k has the noise variance 2 sigma^2 / (k dt)^2 per axis, and its way grows with k.
 */
export function lagAdvice({ trappedStepPx, assessed }: Facts): Advice[] {
  const sigma = assessed.detection.errorPx;
  if (sigma === null || !(trappedStepPx > 0)) return [];
  const noise = 4 * sigma * sigma;
  if (noise <= NOISE_MOST * (noise + trappedStepPx ** 2)) return [];
  const lag = Math.ceil(Math.sqrt((noise * (1 - NOISE_MOST)) / NOISE_MOST) / trappedStepPx);
  return [
    {
      about: 'frame rate',
      weight: 'know',
      sentence: `Trapped tracers move ${about(trappedStepPx)} px from frame to frame and their positions are uncertain by ${about(sigma)} px per axis: read velocities at a lag of ${lag} frames or more.`,
    },
  ];
}
