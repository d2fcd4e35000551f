import { compareForms } from '@/tracking/line-density-equation/compare-forms';
import { PRODUCTION_FORMS } from '@/tracking/line-density-equation/production-forms';
import { followTransient } from '@/tracking/line-density-equation/transient';
import { Z95 } from '@/tracking/normal-tail';
import type { CoursesView } from '../views/compare-view';

type Forms = Pick<CoursesView['runs'][number]['overTime'], 'forms' | 'verdict' | 'chosen'>;

/** A comparison of three forms needs some more points than numbers. */
const POINTS_LEAST = 8;
const CURVE_POINTS = 60;

/**
 * The three forms of the line-density equation fitted to a course, as curves, and what the data say of them. Only what
 * has an interval takes part. Any quantity that goes with the density may stand for it: the forms have no scale.
 */
export function formCurves(
  timeS: readonly number[],
  course: {
    value: readonly (number | null)[];
    low: readonly (number | null)[];
    high: readonly (number | null)[];
  },
): Forms {
  const points = timeS.flatMap((t, i) => {
    const [value, low, high] = [course.value[i], course.low[i], course.high[i]];
    return value && low && high && high > low ? [{ t, value, lnError: Math.log(high / low) / (2 * Z95) }] : []; // prettier-ignore
  });
  if (points.length < POINTS_LEAST) return { forms: [], verdict: null, chosen: null };
  const first = points[0].t;
  const times = Float64Array.from({ length: CURVE_POINTS }, (_, i) => (i / (CURVE_POINTS - 1)) * (points[points.length - 1].t - first)); // prettier-ignore
  const { forms, chosen, note } = compareForms({
    timeS: points.map(({ t }) => t),
    densityM2: points.map(({ value }) => value),
    lnError: points.map(({ lnError }) => lnError),
  });
  return {
    chosen,
    verdict: note,
    forms: forms.map(({ form, fit, deltaBic, deltaAicc }, k) => {
      const ln = new Float64Array(CURVE_POINTS);
      followTransient(fit.transient, PRODUCTION_FORMS[k].power, times, ln);
      return {
        form,
        deltaBic,
        deltaAicc,
        time_s: Array.from(times, (t) => t + first),
        value: Array.from(ln, Math.exp),
      };
    }),
  };
}
