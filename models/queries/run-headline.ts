import type { RunView } from '@/lib/views/run-view';
import type { AnalysisSummary } from '@/lib/analysis-facts';
import type { Estimate } from '@/tracking/estimates/estimate';

export interface HeadlineRow {
  analysisId: string;
  recordingId: string;
  summary: AnalysisSummary;
  estimates: Estimate[] | null;
}

/** SQL: the newest finished analysis of run `r`, with its estimates of the line density. */
export const HEADLINE = `(
  SELECT json_build_object('analysisId', a.id, 'recordingId', a.recording_id, 'summary', a.summary,
    'estimates', (SELECT jsonb_path_query_array(m.estimates, '$[*] ? (@.quantity == "line_density")')
      FROM analysis_measures m WHERE m.analysis_id = a.id ORDER BY m.tracks_revision DESC LIMIT 1))
  FROM analyses a JOIN recordings g ON g.id = a.recording_id
  WHERE g.run_id = r.id AND g.deleted_at IS NULL AND a.state = 'done' AND a.summary IS NOT NULL
  ORDER BY a.finished_at DESC NULLS LAST, a.id DESC LIMIT 1)`;

export function headlineOf({
  analysisId,
  recordingId,
  summary,
  estimates,
}: HeadlineRow): NonNullable<RunView['headline']> {
  const { tracks, trapped, free, undecided, acceptedCandidates } = summary;
  return {
    analysisId,
    recordingId,
    tracks,
    trapped,
    free,
    undecided,
    acceptedCandidates,
    lineDensity_m2: bestDensity(estimates ?? []),
  };
}

/** The combined estimate, or where the methods disagree the first that has a value. */
function bestDensity(estimates: Estimate[]): NonNullable<RunView['headline']>['lineDensity_m2'] {
  const known = estimates.filter(({ value }) => value !== null);
  const best = known.find(({ method }) => method === 'combined') ?? known[0];
  if (!best || best.value === null) return null;
  return { value: best.value, low: best.low, high: best.high, method: best.method };
}
