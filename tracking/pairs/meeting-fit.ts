import { KAPPA_M2_S } from '../units';
import { reversed, seenSide, type Separation } from './separation';
import { ModelFitter, type Basis, type TimedFit } from './timed-fit';

const KAPPA_UM2_S = KAPPA_M2_S * 1e12;
/** Search for the time of meeting, frames around the nearest point. */
const REACH = 3;
/** A pair first seen after its meeting may have met this many frames before. */
const UNSEEN_FRAMES = 8;
/** Step of the curvature at the best time, frames. */
const CURVATURE_STEP = 0.25;

export interface MeetingFit {
  /** delta^2 = m0^2 + A-^2 kappa (t0 - t) before, m0^2 + A+^2 kappa (t - t0) after. */
  law: TimedFit;
  /** Free parameters of the law: the offset counts where it pays. */
  parameters: number;
  /** delta^2 = b^2 + w^2 (t - t0)^2. */
  flyBy: TimedFit;
  reducedChi2: number;
  bicGain: number;
  /** Curvature of -2 ln L at t0, per frame^2; NaN where it has none. */
  t0Curvature: number;
}

/**
 * Compares two lines that reconnect (square-root law) with two tracers that fly past each other,
 * the time of meeting by search. A meeting that is seen before it only is fitted with time reversed.
 *
 * @param frameIntervalS s.
 * @param hopeless reduced chi-square of the law with offset above which nothing more is fitted.
 * @returns null where the law is hopeless.
 */
export function fitMeeting(s: Separation, frameIntervalS: number, hopeless = Infinity): MeetingFit | null {
  const seen = seenSide(s);
  if (seen === 'before') {
    const fit = fitMeeting(reversed(s), frameIntervalS, hopeless);
    return fit && backwards(fit);
  }
  const afterOnly = seen !== 'both';
  const kappaPerFrame = KAPPA_UM2_S * frameIntervalS;
  // Columns: offset, after, before. Points before an unseen meeting do not exist.
  const rootLaw: Basis = (since, t0, row) => {
    row[0] = 1;
    row[1] = kappaPerFrame * Math.max(0, since - t0);
    row[2] = kappaPerFrame * Math.max(0, t0 - since);
  };
  const ballistic: Basis = (since, t0, row) => {
    row[0] = 1;
    row[1] = (since - t0) ** 2;
  };
  const columns = afterOnly ? 2 : 3;
  const low = afterOnly ? -UNSEEN_FRAMES : -REACH;
  const high = afterOnly ? 0.9 : REACH;
  const offsetFitter = new ModelFitter(s, rootLaw, columns, 0);
  const offset = offsetFitter.search(low, high);
  if (offset.chi2 / Math.max(1, s.n - columns - 1) > hopeless) return null;
  const plainFitter = new ModelFitter(s, rootLaw, columns, 1);
  const plain = plainFitter.search(low, high);
  const flyBy = new ModelFitter(s, ballistic, 2, 0).search(low - REACH, 2 * REACH);
  const lnN = Math.log(s.n);
  const bicOffset = offset.minusTwoLnL + (columns + 1) * lnN;
  const bicPlain = plain.minusTwoLnL + columns * lnN;
  const useOffset = bicOffset < bicPlain;
  const law = useOffset ? offset : plain;
  const parameters = useOffset ? columns + 1 : columns;
  const near = (t0: number) => (useOffset ? offsetFitter : plainFitter).at(t0).minusTwoLnL;
  const h = CURVATURE_STEP;
  return {
    law,
    parameters,
    flyBy,
    reducedChi2: law.chi2 / Math.max(1, s.n - parameters),
    bicGain: flyBy.minusTwoLnL + 3 * lnN - Math.min(bicOffset, bicPlain),
    t0Curvature: (near(law.t0 + h) - 2 * law.minusTwoLnL + near(law.t0 - h)) / (h * h),
  };
}

/** The fit of a meeting whose time was reversed: what came after comes before. */
function backwards(fit: MeetingFit): MeetingFit {
  const turned = (one: TimedFit): TimedFit => ({
    ...one,
    t0: -one.t0,
    modelUm2: one.modelUm2.slice().reverse(),
  });
  const law = turned(fit.law);
  const [offset, after] = law.coefficients;
  const [offsetError, afterError] = law.errors;
  return {
    ...fit,
    law: {
      ...law,
      coefficients: Float64Array.of(offset, 0, after),
      errors: Float64Array.of(offsetError, 0, afterError),
    },
    flyBy: turned(fit.flyBy),
  };
}
