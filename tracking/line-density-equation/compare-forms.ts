import { fitTransient, type DensitySeries, type TransientFit } from './fit-transient';
import { PRODUCTION_FORMS, type ProductionForm } from './production-forms';

/** One form of the production term beside the others. */
export interface FormComparison {
  form: ProductionForm['name'];
  fit: TransientFit;
  /** Bayesian and corrected Akaike information criteria above the least of all forms. */
  deltaBic: number;
  deltaAicc: number;
}

export interface FormVerdict {
  /** In the order of `PRODUCTION_FORMS`. */
  forms: FormComparison[];
  /** The form that the data ask for, or null: the data cannot tell. */
  chosen: ProductionForm['name'] | null;
  note: string;
}

/** Differences below 6 of the information criterion don't decide. */
const DECISIVE_BIC = 6;
/** Three numbers of the transient, and the scatter. */
const FITTED = 4;

/**
 * Fits all published production forms to a transient and says which one the data ask for, if any.
 *
 * @throws RangeError as `fitTransient`, and with fewer than 6 points.
 */
export function compareForms(series: DensitySeries): FormVerdict {
  const n = series.timeS.length;
  if (n < FITTED + 2) throw new RangeError(`A comparison of forms needs at least 6 points. Received ${n}.`);
  const fits = PRODUCTION_FORMS.map(({ name, power }) => ({ form: name, fit: fitTransient(series, power) }));
  const deviance = fits.map(({ fit }) => n * Math.log(Math.max(fit.squares, Number.MIN_VALUE) / n));
  const bic = deviance.map((d) => d + FITTED * Math.log(n));
  const aicc = deviance.map((d) => d + 2 * FITTED + (2 * FITTED * (FITTED + 1)) / (n - FITTED - 1));
  const above = (list: readonly number[], k: number) => list[k] - Math.min(...list);
  const forms = fits.map((one, k) => ({ ...one, deltaBic: above(bic, k), deltaAicc: above(aicc, k) }));
  const [best, second] = [...forms].sort((a, b) => a.deltaBic - b.deltaBic);
  if (second.deltaBic < DECISIVE_BIC) {
    const note = `The data cannot tell the forms apart: ${best.form} and ${second.form} differ by ${second.deltaBic.toFixed(1)} in the information criterion, and less than ${DECISIVE_BIC} doesn’t decide.`;
    return { forms, chosen: null, note };
  }
  const note = `${best.form} describes the transient better than ${second.form} by ${second.deltaBic.toFixed(0)} in the information criterion.`;
  return { forms, chosen: best.form, note };
}
