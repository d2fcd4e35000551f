import { NonNegativeLeastSquares } from './non-negative-least-squares';
import { SIDE_POINTS_MAX, type Separation } from './separation';

/** Rounds of reweighting by the model's own variance: from nothing, and from a neighbouring fit. */
const FIRST_ROUNDS = 4;
const NEXT_ROUNDS = 2;
const COARSE_STEP = 0.5;
const FINE_STEP = 0.1;

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

/** Fills in the columns of a model for one point. */
export type Basis = (since: number, t0: number, row: Float64Array) => void;

/** Variance of a squared separation whose true value is `square`, um^4. */
export function variance(noiseUm2: number, square: number): number {
  return 4 * noiseUm2 * square + 4 * noiseUm2 * noiseUm2 + 1e-9;
}

/**
 * Fits one model of a separation at any time of meeting: Gaussian likelihood with the variance of
 * the model itself, coefficients >= 0.
 */
export class ModelFitter {
  private readonly points = 2 * SIDE_POINTS_MAX;
  private readonly solver = new NonNegativeLeastSquares();
  private readonly rows = new Float64Array(3 * this.points);
  private readonly row = new Float64Array(3);
  private readonly weights = new Float64Array(this.points);
  private readonly model = new Float64Array(this.points);
  private warm = false;

  /** @param skip leading columns that are left out, their coefficients 0. */
  constructor(
    private readonly s: Separation,
    private readonly basis: Basis,
    private readonly columns: number,
    private readonly skip: number,
  ) {}

  /** Best time of meeting between two bounds: coarse steps, then fine ones around the best. */
  search(low: number, high: number): TimedFit {
    let best = low;
    let least = Infinity;
    const look = (from: number, to: number, step: number) => {
      for (let t0 = from; t0 <= to + 1e-9; t0 += step) {
        const value = this.evaluate(t0).minusTwoLnL;
        if (value >= least) continue;
        least = value;
        best = t0;
      }
    };
    look(low, high, COARSE_STEP);
    look(Math.max(low, best - COARSE_STEP), Math.min(high, best + COARSE_STEP), FINE_STEP);
    return this.at(best);
  }

  /** The fit at one time. */
  at(t0: number): TimedFit {
    this.warm = false;
    const { minusTwoLnL, chi2 } = this.evaluate(t0);
    const coefficients = new Float64Array(this.columns);
    const errors = new Float64Array(this.columns);
    const used = this.columns - this.skip;
    coefficients.set(this.solver.x.subarray(0, used), this.skip);
    errors.set(this.solver.errors.subarray(0, used), this.skip);
    return { t0, coefficients, errors, minusTwoLnL, chi2, modelUm2: this.model.slice(0, this.s.n) };
  }

  private evaluate(t0: number): { minusTwoLnL: number; chi2: number } {
    const { s, rows, row, weights, model, skip } = this;
    const used = this.columns - skip;
    for (let i = 0; i < s.n; i++) {
      this.basis(s.since[i], t0, row);
      for (let c = 0; c < used; c++) rows[i * used + c] = row[skip + c];
    }
    if (!this.warm) for (let i = 0; i < s.n; i++) model[i] = Math.max(0, s.squareUm2[i]);
    const rounds = this.warm ? NEXT_ROUNDS : FIRST_ROUNDS;
    this.warm = true;
    for (let round = 0; round < rounds; round++) {
      for (let i = 0; i < s.n; i++) weights[i] = 1 / variance(s.noiseUm2[i], model[i]);
      this.solver.solve(rows, s.squareUm2, weights, s.n, used);
      for (let i = 0; i < s.n; i++) {
        let sum = 0;
        for (let c = 0; c < used; c++) sum += rows[i * used + c] * this.solver.x[c];
        model[i] = sum;
      }
    }
    let chi2 = 0;
    let lnVariances = 0;
    for (let i = 0; i < s.n; i++) {
      const v = variance(s.noiseUm2[i], model[i]);
      chi2 += (s.squareUm2[i] - model[i]) ** 2 / v;
      lnVariances += Math.log(v);
    }
    return { minusTwoLnL: chi2 + lnVariances, chi2 };
  }
}
