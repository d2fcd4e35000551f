import type { PdfSeries } from './pdf-series';
import { quantityText } from '../format/quantity';
import { DISPLAY_UNITS } from '../format/unit';
import type { MeasuresView } from '../views/analysis-view';

export type Pdf = MeasuresView['pdfs'][number];
export type PdfComponentName = Pdf['component'];

/** Components that were measured, those of the flow before those of the image. */
export function componentsOf(pdfs: readonly Pdf[]): PdfComponentName[] {
  const order: PdfComponentName[] = ['along', 'across', 'x', 'y', 'speed'];
  return order.filter((component) => pdfs.some((pdf) => pdf.component === component));
}

/** Lags that were measured, shortest first. */
export function lagsOf(pdfs: readonly Pdf[]): { lagFrames: number; lagS: number }[] {
  const lags = new Map(pdfs.map((pdf) => [pdf.lagFrames, pdf.lag_s]));
  return [...lags].sort(([a], [b]) => a - b).map(([lagFrames, lagS]) => ({ lagFrames, lagS }));
}

/** The populations to draw at a component and lag; "all" only where no population was told apart. */
export function pdfsAt(pdfs: readonly Pdf[], component: PdfComponentName, lagFrames: number): Pdf[] {
  const here = pdfs.filter(
    (pdf) => pdf.component === component && pdf.lagFrames === lagFrames && pdf.samples > 0,
  );
  const told = here.filter(({ population }) => population === 'trapped' || population === 'free');
  return here.filter(({ population }) => (population === 'all') === (told.length === 0));
}

export function pdfSeries(pdf: Pdf): PdfSeries {
  return {
    population: pdf.population,
    finding: spread(pdf),
    kernel: pdf.kernel,
    bins: pdf.count.map((count, i) => ({
      low_m_s: pdf.edges_m_s[i],
      high_m_s: pdf.edges_m_s[i + 1],
      count,
      density_s_m: pdf.density_s_m[i],
      densityLow: pdf.low_s_m[i],
      densityHigh: pdf.high_s_m[i],
    })),
  };
}

const { unit, siPerUnit } = DISPLAY_UNITS.velocity;

function spread({ standardDeviation_m_s: value }: Pdf): string {
  return value === null ? 'spread unknown' : `r.m.s. ${quantityText({ value, siPerUnit, unit, digits: 2 })}`;
}

/** The plot in one sentence. */
export function pdfSentence(pdfs: readonly Pdf[], component: PdfComponentName, lagS: number): string {
  const lag = `${Number((lagS * 1e3).toPrecision(3))} ms`;
  if (pdfs.length === 0) return `No velocity was measured ${component} at a lag of ${lag}.`;
  const parts = pdfs.map((pdf) => `${pdf.population} ${spread(pdf)} from ${pdf.tracks} tracks`);
  return `Velocity density, component ${component}, lag ${lag}: ${parts.join('; ')}.`;
}
