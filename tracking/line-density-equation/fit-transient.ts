import { choleskyFactor, choleskySolve } from '../detection/cholesky';
import { followTransient, type Transient } from './transient';

/** Line density against time; errors are relative. */
export interface DensitySeries {
  /** Ascending, s. */
  timeS: ArrayLike<number>;
  densityM2: ArrayLike<number>;
  /** Standard errors of ln L; all alike where they are unknown. */
  lnError?: ArrayLike<number>;
}

export interface TransientFit {
  transient: Transient;
  /** Standard errors of the logarithms of its three numbers, from the scatter about the fit. */
  lnErrors: { start: number; steady: number; rate: number };
  /** Weighted sum of squares of ln L about the fit. */
  squares: number;
  converged: boolean;
}

const PARAMETERS = 3;
const ROUNDS_MOST = 60;
const DONE = 1e-8;
const DIFFERENCE = 1e-5;
/** Rates that are tried first, in units of one over the duration, and steady states over the last value. */
const RATES = [0.1, 0.4, 1.5, 6, 25];
const STEADY = [0.25, 1, 4];

/**
 * Least squares of ln L with one form of the line-density equation, by damped Gauss-Newton steps
 * (Levenberg-Marquardt) from the best of several starts.
 *
 * @param power of the production term, see `PRODUCTION_FORMS`.
 * @throws RangeError with fewer than 4 points, or densities that are not positive.
 */
export function fitTransient(series: DensitySeries, power: number): TransientFit {
  const { timeS, densityM2, lnError } = series;
  const n = timeS.length;
  if (n < PARAMETERS + 1) throw new RangeError(`A transient needs at least 4 points. Received ${n}.`);
  const ln = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    if (!(densityM2[i] > 0)) throw new RangeError(`Densities must be > 0. Received ${densityM2[i]}.`);
    ln[i] = Math.log(densityM2[i]);
  }
  const weight = Float64Array.from({ length: n }, (_, i) => (lnError ? 1 / lnError[i] : 1));
  const model = new Float64Array(n);
  const moved = new Float64Array(n);
  const times = Float64Array.from(timeS, (t) => t - timeS[0]);
  const transientOf = (theta: ArrayLike<number>): Transient => ({
    startM2: Math.exp(theta[0]),
    steadyM2: Math.exp(theta[1]),
    ratePerS: Math.exp(theta[2]),
  });
  const squaresOf = (theta: ArrayLike<number>, out: Float64Array) => {
    followTransient(transientOf(theta), power, times, out);
    let sum = 0;
    for (let i = 0; i < n; i++) sum += (weight[i] * (ln[i] - out[i])) ** 2;
    return sum;
  };

  let theta = new Float64Array(PARAMETERS);
  let squares = Infinity;
  for (const rate of RATES) {
    for (const steady of STEADY) {
      const start = Float64Array.of(ln[0], ln[n - 1] + Math.log(steady), Math.log(rate / times[n - 1]));
      const here = descend(start);
      if (here.squares < squares) ({ theta, squares } = here);
    }
  }
  const final = descend(theta, ROUNDS_MOST);
  const scatter = final.squares / (n - PARAMETERS);
  const variance = inverseDiagonal(final.normal);
  return {
    transient: transientOf(final.theta),
    lnErrors: {
      start: Math.sqrt(scatter * variance[0]),
      steady: Math.sqrt(scatter * variance[1]),
      rate: Math.sqrt(scatter * variance[2]),
    },
    squares: final.squares,
    converged: final.converged,
  };

  function descend(from: Float64Array<ArrayBuffer>, rounds = 6) {
    let at = from;
    let now = squaresOf(at, model);
    let damping = 1e-2;
    let converged = false;
    const normal = new Float64Array(PARAMETERS * PARAMETERS);
    const step = new Float64Array(PARAMETERS);
    for (let round = 0; round < rounds && !converged; round++) {
      squaresOf(at, model);
      normalEquations(at, normal, step);
      const damped = normal.slice();
      for (let k = 0; k < PARAMETERS; k++) damped[k * PARAMETERS + k] *= 1 + damping;
      const solved = choleskyFactor(damped, PARAMETERS, PARAMETERS);
      if (solved) choleskySolve(damped, PARAMETERS, PARAMETERS, step);
      const next = at.map((value, k) => value + Math.max(-2, Math.min(2, step[k])));
      const then = solved ? squaresOf(next, moved) : Infinity;
      if (then <= now) {
        converged = now - then <= DONE * now;
        at = next;
        now = then;
        damping = Math.max(1e-9, damping / 8);
      } else if ((damping *= 10) > 1e9) converged = true;
    }
    squaresOf(at, model);
    normalEquations(at, normal, step);
    return { theta: at, squares: now, converged, normal };
  }

  /** J'J and J'r by differences; `model` holds the values at `at`. */
  function normalEquations(at: Float64Array, normal: Float64Array, gradient: Float64Array): void {
    const slopes = Array.from({ length: PARAMETERS }, (_, k) => {
      const shifted = at.map((value, j) => (j === k ? value + DIFFERENCE : value));
      squaresOf(shifted, moved);
      return moved.map((value, i) => (weight[i] * (value - model[i])) / DIFFERENCE);
    });
    for (let a = 0; a < PARAMETERS; a++) {
      gradient[a] = 0;
      for (let i = 0; i < n; i++) gradient[a] += slopes[a][i] * weight[i] * (ln[i] - model[i]);
      for (let b = 0; b <= a; b++) {
        let sum = 0;
        for (let i = 0; i < n; i++) sum += slopes[a][i] * slopes[b][i];
        normal[a * PARAMETERS + b] = sum;
      }
      // A number that the data don't touch must not make the system singular.
      normal[a * PARAMETERS + a] += 1e-12;
    }
  }
}

function inverseDiagonal(normal: Float64Array): number[] {
  const factor = normal.slice();
  if (!choleskyFactor(factor, PARAMETERS, PARAMETERS)) return new Array<number>(PARAMETERS).fill(Infinity);
  return Array.from({ length: PARAMETERS }, (_, k) => {
    const unit = new Float64Array(PARAMETERS);
    unit[k] = 1;
    choleskySolve(factor, PARAMETERS, PARAMETERS, unit);
    return unit[k];
  });
}
