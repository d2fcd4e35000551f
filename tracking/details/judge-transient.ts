import { chiSquareTail } from '../estimates/random-effects';
import { compareForms, type FormComparison } from '../line-density-equation/compare-forms';
import { Z95 } from '../normal-tail';
import type { Conditions } from '../types';
import { fitDecayLaws, type DecayLaw } from './decay-laws';
import type { SeriesPoint } from './series';

/** A change less likely than this by chance is a transient. */
const STEADY_FROM = 0.01;
/** A curve needs so many points, and so many errors of its ends apart, to be worth a fit. */
const POINTS_LEAST = 8;

/** Whether the number of lines changed, and which law its course asks for. Plain JSON. */
export interface TransientVerdict {
  kind: 'steady' | 'growth' | 'decay' | 'unknown';
  /** Chance of a scatter this large about a constant. */
  pConstant: number | null;
  /** Forms of the line-density equation, for a driven flow; scale-free, so tracers stand for lines. */
  forms: { form: string; deltaBic: number; deltaAicc: number; ratePerS: number; rateLnError: number }[];
  /** Laws of free decay, for a flow without drive. */
  laws: DecayLaw[];
  note: string;
}

/**
 * Judges the course of the trapped tracers: constant within their errors, or a transient to which the
 * forms of the line-density equation (driven) or the laws of decay (undriven) are fitted. All forms are
 * told; where they differ too little the data cannot tell.
 */
export function judgeTransient(
  timeS: readonly number[],
  trapped: readonly SeriesPoint[],
  conditions: Pick<Conditions, 'heatFlux_W_m2'>,
): TransientVerdict {
  const none = { forms: [], laws: [] };
  const points = trapped.flatMap(({ value, low, high }, w) =>
    value !== null && value > 0 && low !== null && high !== null && low > 0
      ? [{ timeS: timeS[w], value, lnError: Math.log(high / low) / (2 * Z95) }]
      : [],
  );
  if (points.length < POINTS_LEAST) {
    const note = 'Too few windows hold trapped tracers to follow their number over time.';
    return { kind: 'unknown', pConstant: null, ...none, note };
  }
  const { pConstant, slope } = trend(points);
  if (pConstant > STEADY_FROM) {
    const note = `The number of trapped tracers stays the same within its errors (chance ${pConstant.toPrecision(2)}): a steady state, from which no form of the line-density equation can be told.`;
    return { kind: 'steady', pConstant, ...none, note };
  }
  const kind = slope < 0 ? 'decay' : 'growth';
  const series = {
    timeS: points.map((p) => p.timeS),
    densityM2: points.map((p) => p.value),
    lnError: points.map((p) => p.lnError),
  };
  if (kind === 'decay' && !conditions.heatFlux_W_m2) {
    const { laws, note } = fitDecayLaws(series);
    return { kind, pConstant, forms: [], laws, note };
  }
  const { forms, note } = compareForms(series);
  return { kind, pConstant, forms: forms.map(formOf), laws: [], note };
}

const formOf = ({ form, fit, deltaBic, deltaAicc }: FormComparison) => ({
  form,
  deltaBic,
  deltaAicc,
  ratePerS: fit.transient.ratePerS,
  rateLnError: Number.isFinite(fit.lnErrors.rate) ? fit.lnErrors.rate : -1,
});

/**
 * Straight line of ln n against time. Windows share tracers, so their scatter about a line is no measure
 * of its error; a slope is significant by the errors of the two halves of the recording.
 */
function trend(points: readonly { timeS: number; value: number; lnError: number }[]) {
  const half = Math.floor(points.length / 2);
  const mean = (part: typeof points) => {
    const weights = part.map((p) => 1 / p.lnError ** 2);
    const total = weights.reduce((a, b) => a + b, 0);
    const ln = part.reduce((sum, p, i) => sum + weights[i] * Math.log(p.value), 0) / total;
    // Tracers stay through many windows: the error of a half is hardly smaller than that of a window.
    const error = part.reduce((sum, p) => sum + p.lnError, 0) / part.length;
    return { ln, error };
  };
  const [a, b] = [mean(points.slice(0, half)), mean(points.slice(-half))];
  const slope = b.ln - a.ln;
  return { slope, pConstant: chiSquareTail(slope ** 2 / (a.error ** 2 + b.error ** 2), 1) };
}
