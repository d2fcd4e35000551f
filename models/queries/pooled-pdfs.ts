import type { PooledPdfQuery } from '@/lib/schemas/compare';
import type { PooledPdfView } from '@/lib/views/compare-view';
import { KAPPA_M2_S } from '@/tracking/units';
import { poolPdfs, type RunPdf } from '@/tracking/velocity-pdfs/pool-pdfs';
import type { VelocityPdf } from '@/tracking/velocity-pdf-shape';
import { selectRows } from './select';
import { selectedRuns, type SelectedRun } from './selected-runs';

type Scale = PooledPdfQuery['scale'];
type PooledRun = PooledPdfView['runs'][number];

const UNITS: Record<Scale, string> = { none: 'm/s', deviation: 'standard deviations', 'kappa-over-spacing': 'kappa/l' }; // prettier-ignore

/**
 * The distribution of one velocity component pooled over the runs of a selection: each run counts once, what differs
 * between runs is told beside the mean, and runs that can't take part are named with the reason.
 */
export async function pooledPdf(
  labId: string,
  { population, component, lag_s, scale, ...selection }: PooledPdfQuery,
): Promise<PooledPdfView> {
  const { runs } = await selectedRuns(labId, selection);
  const pdfs = await pdfsOf(labId, runs, population, component);
  const taken: { run: SelectedRun; pdf: VelocityPdf; scaled: RunPdf; scaleMS: number }[] = [];
  const leftOut: PooledPdfView['leftOut'] = [];
  for (const run of runs) {
    const pdf = atLag(run.found ? (pdfs.get(run.found.analysisId) ?? []) : [], lag_s);
    const size = pdf && scaleOf(scale, run, pdf);
    const reason = run.exclusion
      ? `Left out by ${run.exclusion.by}: ${run.exclusion.reason}`
      : !run.found
        ? 'No analysis of this run is done.'
        : !pdf
          ? 'It has no velocities of this population and component.'
          : typeof size === 'string'
            ? size
            : null;
    if (reason !== null || !pdf || typeof size !== 'number') {
      leftOut.push({ runId: run.id, runName: run.name, reason: reason ?? '' });
      continue;
    }
    taken.push({ run, pdf, scaled: rescaled(pdf, size, scale === 'deviation' ? pdf.meanMS : 0), scaleMS: size }); // prettier-ignore
  }
  const about = { population, component, scale, unit: UNITS[scale], leftOut };
  if (taken.length === 0) {
    return { ...about, lags_s: null, edges: [], density: [], low: [], high: [], between: [], runs: [] };
  }
  const pooled = poolPdfs(taken.map(({ scaled }) => scaled));
  const lags = taken.map(({ pdf }) => pdf.lagS);
  return {
    ...about,
    ...pooled,
    lags_s: { least: Math.min(...lags), most: Math.max(...lags) },
    runs: taken.map(({ run, pdf, scaleMS }, i): PooledRun => ({
      runId: run.id,
      analysisId: run.found!.analysisId,
      runName: run.name,
      campaignName: run.campaign_name,
      samples: pdf.samples,
      tracks: pdf.tracks,
      lag_s: pdf.lagS,
      scale_m_s: scaleMS,
      density: pooled.runs[i],
    })),
  };
}

/** Distributions of the wanted kind by analysis, of the newest measures. A doubled $ is one of the path, not of a value. */
async function pdfsOf(
  labId: string,
  runs: readonly SelectedRun[],
  population: string,
  component: string,
): Promise<Map<string, VelocityPdf[]>> {
  const ids = runs.flatMap(({ found }) => found?.analysisId ?? []);
  const rows = await selectRows<{ id: string; pdfs: VelocityPdf[] }>(
    `SELECT DISTINCT ON (a.id) a.id, jsonb_path_query_array(m.pdfs,
       '$[*] ? (@.population == $$population && @.component == $$component)', $3::jsonb) AS pdfs
     FROM analyses a JOIN analysis_measures m ON m.analysis_id = a.id
     WHERE a.lab_id = $1 AND a.id = ANY($2::uuid[]) ORDER BY a.id, m.tracks_revision DESC`,
    [labId, ids, JSON.stringify({ population, component })],
  );
  return new Map(rows.map(({ id, pdfs }) => [id, pdfs]));
}

/** The distribution whose lag is nearest, by ratio; the shortest lag where none is wanted. */
function atLag(pdfs: readonly VelocityPdf[], lagS: number | undefined): VelocityPdf | null {
  const far = ({ lagS: own }: VelocityPdf) => (lagS === undefined ? own : Math.abs(Math.log(own / lagS)));
  return pdfs.reduce<VelocityPdf | null>((best, pdf) => (best && far(best) <= far(pdf) ? best : pdf), null);
}

/** One of the pooled unit, m/s; a sentence where a run has none. */
function scaleOf(scale: Scale, { found }: SelectedRun, { varianceM2S2 }: VelocityPdf): number | string {
  if (scale === 'none') return 1;
  if (scale === 'deviation') {
    return varianceM2S2 !== null && varianceM2S2 > 0
      ? Math.sqrt(varianceM2S2)
      : 'Its velocities have no standard deviation.';
  }
  const spacing = found?.estimates?.find(
    ({ quantity, method }) => quantity === 'line_spacing' && method === 'combined',
  )?.value;
  return spacing ? KAPPA_M2_S / spacing : 'It has no combined line spacing.';
}

/** (v - centre) / size, its density still of integral 1. */
function rescaled(pdf: VelocityPdf, size: number, centre: number): RunPdf {
  const times = (value: number | null) => (value === null ? null : value * size);
  return {
    edges: pdf.edgesMS.map((edge) => (edge - centre) / size),
    density: pdf.density.map((value) => value * size),
    low: pdf.densityLow.map(times),
    high: pdf.densityHigh.map(times),
  };
}
