import type { SeparationFit, SeparationPoint } from '@/components/charts/separation-plot';
import { quantityText } from '@/lib/format/quantity';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { CandidateView } from '@/lib/views/analysis-view';

/** Standard errors to half widths of 95 %. */
const Z95 = 1.96;

/** Squared separation with half widths: the error of a square is twice the length times its error. */
export function separationPoints({ series }: CandidateView): SeparationPoint[] {
  return series.t_s.map((t_s, i) => {
    const length = series.separation_m[i];
    const error = series.error_m[i];
    return {
      t_s,
      separationSquared_m2: length ** 2,
      uncertainty_m2: error === null ? null : Z95 * 2 * length * error,
    };
  });
}

/** The fitted laws where they have values: the square-root law, and its rival, the straight fly-by. */
export function separationFits({ series }: CandidateView): SeparationFit[] {
  const fit = (name: string, lengths: readonly (number | null)[], rival: boolean): SeparationFit => ({
    name,
    rival,
    points: lengths.flatMap((length, i) =>
      length === null ? [] : [{ t_s: series.t_s[i], separationSquared_m2: length ** 2 }],
    ),
  });
  return [fit('square-root law', series.law_m, false), fit('fly-by', series.flyBy_m, true)].filter(
    ({ points }) => points.length > 1,
  );
}

/** A small probability as people write it. */
export function chanceText(value: number | null): string {
  if (value === null) return '';
  if (value < 0.001) return '< 0.001';
  return value < 0.0995 ? value.toPrecision(2) : value.toFixed(2);
}

const { unit, siPerUnit } = DISPLAY_UNITS.smallLength;

/** A candidate in one sentence. */
export function candidateSentence(candidate: CandidateView): string {
  const least = quantityText({ value: candidate.minSeparation_m, siPerUnit, unit, digits: 3 });
  const side = (name: string, fit: CandidateView['before']) =>
    fit?.amplitude == null
      ? `${name}: not enough points`
      : `${name}: amplitude ${quantityText({ value: fit.amplitude, uncertainty: fit.amplitudeError })}`;
  return `Squared separation of tracks ${candidate.trackA} and ${candidate.trackB}, closest ${least} at ${candidate.t0_s.toFixed(3)} s; ${side('before', candidate.before)}; ${side('after', candidate.after)}.`;
}
