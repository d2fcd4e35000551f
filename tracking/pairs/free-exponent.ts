import type { MeetingFit } from './meeting-fit';
import { NonNegativeLeastSquares } from './non-negative-least-squares';
import { SIDE_POINTS_MIN, type Separation } from './separation';
import { variance } from './timed-fit';

const EXPONENT = { low: 0.1, high: 1.5, step: 0.1 } as const;
/** Around the best exponent of the grid the step is this much finer, until it resolves the error. */
const FINER = 8;
const ROUNDS = 3;
/** The time of meeting is searched again with every exponent, this far around that of the law, frames. */
const T0_REACH = 3;
const T0_STEP = 0.5;
const T0_TOLERANCE = 0.01;
/** A separation below this many standard errors of a coordinate carries no exponent. */
const CLEAR_ERRORS = 3;

/**
 * Exponent a of delta^2 = m0^2 + C |t - t0|^(2a) on one side, with offset, factor and time of
 * meeting free: least chi-square over a grid, error where it rises by 1.
 *
 * @param side -1 before the meeting, 1 after it.
 * @returns null where the points can't tell (too few, too near, or flat over the whole range).
 */
export function freeExponent(
  s: Separation,
  fit: MeetingFit,
  side: -1 | 1,
): { value: number; error: number } | null {
  const since: number[] = [];
  const square: number[] = [];
  const weight: number[] = [];
  for (let i = 0; i < s.n; i++) {
    if (side * (s.since[i] - fit.law.t0) <= 0) continue;
    if (fit.law.modelUm2[i] < CLEAR_ERRORS ** 2 * s.noiseUm2[i]) continue;
    since.push(s.since[i]);
    square.push(s.squareUm2[i]);
    weight.push(1 / variance(s.noiseUm2[i], fit.law.modelUm2[i]));
  }
  const n = since.length;
  if (n < SIDE_POINTS_MIN) return null;
  const y = Float64Array.from(square);
  const w = Float64Array.from(weight);
  const rows = new Float64Array(2 * n).fill(1);
  const solver = new NonNegativeLeastSquares();
  const chi2At = (a: number, t0: number): number => {
    // A meeting inside the points of its side would not be one.
    if (side * (since[0] - t0) <= 0 || side * (since[n - 1] - t0) <= 0) return Infinity;
    for (let i = 0; i < n; i++) rows[2 * i + 1] = Math.abs(since[i] - t0) ** (2 * a);
    solver.solve(rows, y, w, n, 2);
    const { x } = solver;
    let sum = 0;
    for (let i = 0; i < n; i++) sum += w[i] * (y[i] - x[0] - x[1] * rows[2 * i + 1]) ** 2;
    return sum;
  };
  return leastWithError((a) => leastOverTime((t0) => chi2At(a, t0), fit.law.t0));
}

/** Least value over the time of meeting: a coarse search, then golden sections. */
function leastOverTime(chi2: (t0: number) => number, around: number): number {
  let best = around;
  let least = Infinity;
  for (let shift = -T0_REACH; shift <= T0_REACH; shift += T0_STEP) {
    const value = chi2(around + shift);
    if (value < least) {
      least = value;
      best = around + shift;
    }
  }
  const golden = (Math.sqrt(5) - 1) / 2;
  let low = best - T0_STEP;
  let high = best + T0_STEP;
  while (high - low > T0_TOLERANCE) {
    const left = chi2(high - golden * (high - low));
    const right = chi2(low + golden * (high - low));
    least = Math.min(least, left, right);
    if (left < right) high = low + golden * (high - low);
    else low = high - golden * (high - low);
  }
  return least;
}

/** Place of the least value and half the width over which it rises by less than 1; null where it is flat. */
function leastWithError(chi2: (a: number) => number): { value: number; error: number } | null {
  let { low, high, step }: { low: number; high: number; step: number } = EXPONENT;
  for (let round = 1; ; round++) {
    const at: number[] = [];
    for (let a = low; a <= high + 1e-9; a += step) at.push(a);
    const values = at.map(chi2);
    const found = minimumWithError(at, values, step);
    // The error is resolved, or there is none to resolve.
    if (!found || found.error > 2 * step || round === ROUNDS) return found;
    low = Math.max(EXPONENT.low, found.value - 2 * step);
    high = Math.min(EXPONENT.high, found.value + 2 * step);
    step /= FINER;
  }
}

function minimumWithError(
  at: number[],
  chi2: number[],
  step: number,
): { value: number; error: number } | null {
  let best = 0;
  chi2.forEach((value, i) => {
    if (value < chi2[best]) best = i;
  });
  if (!Number.isFinite(chi2[best])) return null;
  const crossing = (way: -1 | 1): number | null => {
    for (let i = best; chi2[i + way] !== undefined; i += way) {
      const rise = chi2[i + way] - chi2[best] - 1;
      if (rise < 0) continue;
      const before = chi2[i] - chi2[best] - 1;
      return Number.isFinite(rise) ? at[i] + way * step * (before / (before - rise)) : at[i];
    }
    return null;
  };
  const low = crossing(-1);
  const high = crossing(1);
  if (low === null && high === null) return null;
  const value = at[best];
  const error = low !== null && high !== null ? (high - low) / 2 : Math.abs((high ?? low ?? 0) - value);
  return { value, error };
}
