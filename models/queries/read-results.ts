import { LabError, notFound } from '@/lib/errors';
import type { MeasuresView } from '@/lib/views/analysis-view';
import type { PdfKernel, VelocityPdf } from '@/tracking/velocity-pdf-shape';
import { readMeasures, type StoredMeasures } from './analysis-outcome';
import { detailsView } from './details-view';
import { motionView } from './motion-view';
import { selectRow } from './select';

interface State {
  state: string;
  stage: string;
  tracks_revision: number;
}

async function stateOf(labId: string, analysisId: string): Promise<State> {
  const row = await selectRow<State>(
    'SELECT state, stage, tracks_revision FROM analyses WHERE lab_id = $1 AND id = $2',
    [labId, analysisId],
  );
  if (!row) throw notFound('analysis');
  return row;
}

/**
 * Asks for tracks: the analysis must be of the laboratory and its tracks linked.
 * @returns the current revision of the tracks.
 * @throws LabError NOT_FOUND, NOT_COMPUTED
 */
export async function assertTracks(labId: string, analysisId: string): Promise<number> {
  const { state, stage, tracks_revision } = await stateOf(labId, analysisId);
  // Tracks appear when linking commits; what a stopped or failed analysis had staged is gone.
  if (state === 'done' || (state === 'running' && stage === 'measure-flow')) return tracks_revision;
  throw new LabError('NOT_COMPUTED', `There are no tracks: the analysis is ${state}.`);
}

/**
 * What was measured of the flow, for a revision of the tracks or the newest.
 * @throws LabError NOT_FOUND, NOT_COMPUTED
 */
export async function measuresOf(
  labId: string,
  analysisId: string,
  tracksRevision?: number,
): Promise<StoredMeasures> {
  const { state } = await stateOf(labId, analysisId);
  const measures = state === 'done' ? await readMeasures(labId, analysisId, tracksRevision) : null;
  if (!measures) throw new LabError('NOT_COMPUTED', `Nothing is measured: the analysis is ${state}.`);
  return measures;
}

/** Measures and spot counts as the analysis page plots them. @throws LabError NOT_FOUND, NOT_COMPUTED */
export async function measuresView(labId: string, analysisId: string): Promise<MeasuresView> {
  const measures = await measuresOf(labId, analysisId);
  const counts = await selectRow<{ spots: number[] | null }>(
    'SELECT spots_per_frame AS spots FROM analyses WHERE lab_id = $1 AND id = $2',
    [labId, analysisId],
  );
  return {
    tracksRevision: measures.tracksRevision,
    computedAt: measures.computedAt.toISOString(),
    populations: { ...measures.populations, pairs: measures.pairs },
    pdfs: measures.pdfs.map(pdfView),
    estimates: measures.estimates,
    motion: measures.motion && motionView(measures.motion),
    details: measures.details && detailsView(measures.details),
    spotsPerFrame: counts?.spots ?? [],
  };
}

const root = (variance: number | null) => (variance === null ? null : Math.sqrt(Math.max(0, variance)));

/** A distribution under the names and units of the API. */
export function pdfView(pdf: VelocityPdf): MeasuresView['pdfs'][number] {
  return {
    population: pdf.population,
    component: pdf.component,
    lagFrames: pdf.lagFrames,
    lag_s: pdf.lagS,
    edges_m_s: pdf.edgesMS,
    count: pdf.count,
    density_s_m: pdf.density,
    low_s_m: pdf.densityLow,
    high_s_m: pdf.densityHigh,
    samples: pdf.samples,
    tracks: pdf.tracks,
    mean_m_s: pdf.meanMS,
    standardDeviation_m_s: root(pdf.varianceM2S2),
    noise_m_s: root(pdf.noiseVarianceM2S2),
    excessKurtosis: pdf.excessKurtosis,
    kernel: pdf.kernel ? kernelView(pdf.kernel) : null,
  };
}

const kernelView = (kernel: PdfKernel): MeasuresView['pdfs'][number]['kernel'] => ({
  width_m_s: kernel.widthMS,
  independentSamples: kernel.independent,
  at_m_s: kernel.atMS,
  density_s_m: kernel.density,
  toldFrom_m_s: kernel.toldFromMS,
  toldTo_m_s: kernel.toldToMS,
});
