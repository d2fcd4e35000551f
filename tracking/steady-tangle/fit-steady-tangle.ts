import { chiSquareTail } from '../estimates/random-effects';
import { Z95 } from '../normal-tail';
import { studentHalfWidth } from '../student-t';
import { fitLineWithTwoErrors, type LineFit } from './line-with-two-errors';

/** Runs of a campaign; entry i of every array is one run. Errors are standard errors. */
export interface SteadyRuns {
  /** |v_ns|, m/s. */
  vnsMS: ArrayLike<number>;
  vnsErrorMS: ArrayLike<number>;
  /** Square root of the line density, 1/m. */
  rootDensityPerM: ArrayLike<number>;
  rootDensityErrorPerM: ArrayLike<number>;
}

export interface IntervalValue {
  value: number;
  low: number;
  high: number;
}

export interface SteadyTangleFit {
  /** s/m^2. */
  gammaSM2: IntervalValue;
  /** m/s. */
  v0MS: IntervalValue;
  line: LineFit;
  runs: number;
  /** What to mind, in a sentence; null where nothing. */
  caution: string | null;
}

const LEVEL = 0.95;
/** Errors that would leave so much scatter less often than this are too small. */
const DOUBT = 0.05;

/**
 * gamma and v_0 of L^(1/2) = gamma (v_ns - v_0) (Vinen 1957) from runs with errors in both quantities.
 * 95 % intervals from the errors given; where the runs scatter more than those allow, from the scatter, by
 * Student's t. The interval of v_0 is that of Fieller (J. R. Stat. Soc. B 16, 175, 1954) for a ratio.
 *
 * @throws RangeError with fewer than 3 runs or errors that are not positive.
 */
export function fitSteadyTangle(runs: SteadyRuns): SteadyTangleFit {
  const line = fitLineWithTwoErrors({
    x: runs.vnsMS,
    y: runs.rootDensityPerM,
    sx: runs.vnsErrorMS,
    sy: runs.rootDensityErrorPerM,
  });
  const { slope, intercept, slopeError, interceptError, covariance, reducedChiSquare, degrees } = line;
  const scattered = chiSquareTail(reducedChiSquare * degrees, degrees) < DOUBT;
  const t = scattered ? studentHalfWidth(LEVEL, degrees) * Math.sqrt(reducedChiSquare) : Z95;
  // v_0 = -intercept / slope: those v for which intercept + slope v differs from 0 by less than t errors.
  const a = slope ** 2 - (t * slopeError) ** 2;
  const b = slope * intercept - t * t * covariance;
  const c = intercept ** 2 - (t * interceptError) ** 2;
  const root = Math.sqrt(Math.max(0, b * b - a * c));
  const bounded = a > 0;
  return {
    gammaSM2: { value: slope, low: slope - t * slopeError, high: slope + t * slopeError },
    v0MS: {
      value: -intercept / slope,
      low: bounded ? (-b - root) / a : -Infinity,
      high: bounded ? (-b + root) / a : Infinity,
    },
    line,
    runs: runs.vnsMS.length,
    caution: !bounded
      ? 'L^(1/2) doesn’t rise with v_ns for certain, so v_0 has no bounds.'
      : scattered
        ? `The runs scatter ${Math.sqrt(reducedChiSquare).toFixed(1)} times as much as their errors say; the intervals allow for it.`
        : null,
  };
}
