import { settingsOf } from './joint-fit-layout';
import { likelihoodOfExpected, paintExpected, weighExpected } from './joint-fit-expectation';
import { jointFitLikelihood } from './joint-fit';
import { laneSum } from './joint-fit-sums';

const ROUNDS: i32 = 6;

/**
 * Twice the gain in log-likelihood of the fit made last over a background without any spot whose offset is
 * fitted. Leaves the fit's values alone, but not its weights.
 */
export function jointFitSignificance(fit: usize): f64 {
  const s = settingsOf(fit);
  const withSpots = jointFitLikelihood(fit);
  const keptOffset = s.offset;
  const precision = 1 / (s.offsetSpread * s.offsetSpread);
  const bytes = (<usize>(s.stride * s.height)) << 2;
  s.offset = 0;
  for (let round: i32 = 0; round < ROUNDS; round++) {
    paintExpected(fit, 0, <f32>s.offset);
    weighExpected(fit);
    let slope = f32x4.splat(0);
    let curvature = f32x4.splat(0);
    for (let at: usize = 0; at < bytes; at += 16) {
      slope = f32x4.add(slope, v128.load(s.score + at));
      curvature = f32x4.add(curvature, v128.load(s.weight + at));
    }
    s.offset += (laneSum(slope) - s.offset * precision) / (laneSum(curvature) + precision);
  }
  paintExpected(fit, 0, <f32>s.offset);
  const without = likelihoodOfExpected(fit);
  s.offset = keptOffset;
  return 2 * (withSpots - without);
}
