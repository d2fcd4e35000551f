import { KAPPA_M2_S } from '../units';
import { isAfterOnly, type Separation } from './separation';
import { nonNegativeLeastSquares } from './non-negative-least-squares';

const KAPPA_UM2_S = KAPPA_M2_S * 1e12;
/** Rounds of reweighting by the model's own variance. */
const ROUNDS = 4;
/** Search for the time of meeting, frames around the nearest point: coarse, then fine. */
const COARSE_REACH = 3;
const COARSE_STEP = 0.5;
const FINE_STEP = 0.1;
/** A pair first seen after its meeting may have met this many frames before. */
const UNSEEN_FRAMES = 8;

/** A fit of the squared separation at one time of meeting. */
export interface TimedFit {
  /** Frames since the meeting's frame. */
  t0: number;
  /** Coefficients >= 0: squared offset in um^2, then those of the model. */
  coefficients: Float64Array;
  /** Standard errors of the coefficients at this time. */
  errors: Float64Array;
  minusTwoLnL: number;
  chi2: number;
  modelUm2: Float64Array;
}

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

type Basis = (since: number, t0: number, row: Float64Array) => void;

/**
 * Compares two lines that reconnect (square-root law) with two tracers that fly past each other.
 * Gaussian likelihood with the variance of the model, non-negative coefficients, time of meeting
 * by search.
 *
 * @param frameIntervalS s.
 */
export function fitMeeting(s: Separation, frameIntervalS: number): MeetingFit {
  const afterOnly = isAfterOnly(s);
  const kappaPerFrame = KAPPA_UM2_S * frameIntervalS;
  // Columns: offset, before, after. Points before an unseen meeting do not exist.
  const withOffset: Basis = (since, t0, row) => {
    row[0] = 1;
    row[1] = kappaPerFrame * Math.max(0, since - t0);
    row[2] = kappaPerFrame * Math.max(0, t0 - since);
  };
  const sides = afterOnly ? 2 : 3;
  const low = afterOnly ? -UNSEEN_FRAMES : -COARSE_REACH;
  const high = afterOnly ? 0.9 : COARSE_REACH;
  const offset = search(s, withOffset, sides, 0, low, high);
  const plain = search(s, withOffset, sides, 1, low, high);
  const ballistic: Basis = (since, t0, row) => {
    row[0] = 1;
    row[1] = (since - t0) ** 2;
  };
  const flyBy = search(s, ballistic, 2, 0, low - COARSE_REACH, COARSE_REACH * 2);
  const lnN = Math.log(s.n);
  const bicOffset = offset.minusTwoLnL + (sides + 1) * lnN;
  const bicPlain = plain.minusTwoLnL + sides * lnN;
  const useOffset = bicOffset < bicPlain;
  const law = useOffset ? offset : plain;
  const parameters = useOffset ? sides + 1 : sides;
  const at = (t0: number) => fitAt(s, withOffset, sides, useOffset ? 0 : 1, t0).minusTwoLnL;
  const h = 0.25;
  return {
    law,
    parameters,
    flyBy,
    reducedChi2: law.chi2 / Math.max(1, s.n - parameters),
    bicGain: flyBy.minusTwoLnL + 3 * lnN - Math.min(bicOffset, bicPlain),
    t0Curvature: (at(law.t0 + h) - 2 * law.minusTwoLnL + at(law.t0 - h)) / (h * h),
  };
}

function search(
  s: Separation,
  basis: Basis,
  columns: number,
  skip: number,
  low: number,
  high: number,
): TimedFit {
  let best = fitAt(s, basis, columns, skip, low);
  const look = (from: number, to: number, step: number) => {
    for (let t0 = from; t0 <= to + 1e-9; t0 += step) {
      const fit = fitAt(s, basis, columns, skip, t0);
      if (fit.minusTwoLnL < best.minusTwoLnL) best = fit;
    }
  };
  look(low + COARSE_STEP, high, COARSE_STEP);
  const around = best.t0;
  look(Math.max(low, around - COARSE_STEP), Math.min(high, around + COARSE_STEP), FINE_STEP);
  return best;
}

/** @param skip leading columns that are left out, their coefficients 0. */
function fitAt(s: Separation, basis: Basis, columns: number, skip: number, t0: number): TimedFit {
  const used = columns - skip;
  const rows = new Float64Array(s.n * used);
  const row = new Float64Array(3);
  for (let i = 0; i < s.n; i++) {
    basis(s.since[i], t0, row);
    for (let c = 0; c < used; c++) rows[i * used + c] = row[skip + c];
  }
  const model = Float64Array.from(s.squareUm2, (square) => Math.max(0, square));
  const weights = new Float64Array(s.n);
  let solved = { x: new Float64Array(used), errors: new Float64Array(used) };
  for (let round = 0; round < ROUNDS; round++) {
    for (let i = 0; i < s.n; i++) weights[i] = 1 / variance(s.noiseUm2[i], model[i]);
    solved = nonNegativeLeastSquares(rows, s.squareUm2, weights, used);
    for (let i = 0; i < s.n; i++) {
      model[i] = 0;
      for (let c = 0; c < used; c++) model[i] += rows[i * used + c] * solved.x[c];
    }
  }
  let chi2 = 0;
  let lnVariances = 0;
  for (let i = 0; i < s.n; i++) {
    const v = variance(s.noiseUm2[i], model[i]);
    chi2 += (s.squareUm2[i] - model[i]) ** 2 / v;
    lnVariances += Math.log(v);
  }
  const coefficients = new Float64Array(columns);
  const errors = new Float64Array(columns);
  coefficients.set(solved.x, skip);
  errors.set(solved.errors, skip);
  return { t0, coefficients, errors, minusTwoLnL: chi2 + lnVariances, chi2, modelUm2: model };
}

/** Variance of a squared separation whose true value is `square`, um^4. */
export function variance(noiseUm2: number, square: number): number {
  return 4 * noiseUm2 * square + 4 * noiseUm2 * noiseUm2 + 1e-9;
}
