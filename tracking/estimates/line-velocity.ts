import type { EstimateContext } from './context';
import { blockError } from './image-blocks';
import { notUsable, type DensityResult } from './interval';
import { widthByParts } from './line-spread';
import { transverseMotion } from './line-motion';
import {
  LINE_VELOCITY_FACTOR,
  LINE_VELOCITY_FACTOR_ERROR,
  spacingFromLineVelocity,
} from './line-velocity-law';
import { byLine, perhapsOneLine, sumError } from './shared-motion';

/** Above this part of the variance noise spoils the result. */
export const NOISE_PART_MAX = 0.5;
/** How well the step from the shortest lag to none is known, as a part of it: it depends on how lines forget. */
const WITHOUT_LAG_ERROR = 0.5;

/**
 * Spacing of lines that move by their own curvature: v = c2 (kappa / 4 pi) ln(l / a0) / l in three
 * dimensions, one component across the flow by sqrt 3. Trimmed r.m.s. of the trapped tracks, mean
 * drift and localization noise taken off; from the shortest lag that keeps noise small and twice that
 * lag it is carried to no lag at all.
 */
export function lineVelocityEstimate(context: EstimateContext): DensityResult {
  const method = 'line-velocity';
  const best = transverseMotion(context);
  if (!best)
    return notUsable(
      method,
      'The trapped tracks are too short for velocities, or their positions have no errors.',
    );
  const { variance0 } = best;
  const inputs = {
    lag: { value: best.lagFrames * context.conditions.frameInterval_s, unit: 's' },
    transverseRms: { value: Math.sqrt(Math.max(0, variance0)), unit: 'm/s' },
    rmsWithoutLagOverRms: { value: Math.sqrt(Math.max(0, best.withoutLag)), unit: '' },
    noiseRms: { value: Math.sqrt(best.noise), unit: 'm/s' },
    factor: { value: LINE_VELOCITY_FACTOR, unit: '' },
  };
  if (best.noise > NOISE_PART_MAX * best.variance || !(variance0 > 0)) {
    return notUsable(
      method,
      'Localization noise is more than half of the variance of the velocities.',
      inputs,
    );
  }
  const valueM2 = densityFromTransverse(variance0);
  const byVariance = powerOfVariance(variance0);
  const { groups, tracks, image } = context;
  const ofLines = byLine(best.influence0, groups);
  const error = Math.max(
    sumError(ofLines, perhapsOneLine(groups)) * widthByParts(ofLines),
    blockError(best.influence0, tracks, image),
  );
  const statistical = (byVariance * error) / variance0;
  const withoutLag = WITHOUT_LAG_ERROR * byVariance * Math.abs(Math.log(best.withoutLag));
  return {
    method,
    valueM2,
    statistical,
    // L goes as the square of the velocity, up to the logarithm.
    systematic: Math.hypot(2 * LINE_VELOCITY_FACTOR_ERROR, withoutLag),
    inputs,
    note: 'Velocity of the lines across the flow, as if curvature alone moved them; the factor of the law is known to 30 %.',
  };
}

/** L from the variance of one component of the velocity of lines, (m/s)^2; NaN unless it is > 0. */
export function densityFromTransverse(variance: number, factor = LINE_VELOCITY_FACTOR): number {
  return spacingFromLineVelocity(Math.sqrt(3 * Math.max(0, variance)), factor) ** -2;
}

/** d ln L / d ln of the variance: 1 up to the logarithm of the law. */
function powerOfVariance(variance: number): number {
  const step = 1e-3;
  return Math.log(densityFromTransverse(variance * (1 + step)) / densityFromTransverse(variance)) / step;
}
