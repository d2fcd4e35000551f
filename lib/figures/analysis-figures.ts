import { curveTable } from '../charts/curve-table';
import { DENSITY_UNIT, estimateRows, SPACING_UNIT } from '../charts/estimate-rows';
import { logRanges, memoryCurve, memoryRanges, motionComponents, spreadCurve, toldApart } from '../charts/motion-curves'; // prettier-ignore
import { componentsOf, lagsOf, pdfsAt, pdfSentence, pdfSeries } from '../charts/pdf-choices';
import { pdfTable } from '../charts/pdf-table';
import type { ChartTable } from '../charts/chart-table';
import type { MeasuresView } from '../views/analysis-view';
import { curveFigure } from './curve-figure';
import { estimatesFigure } from './estimates-figure';
import type { Figure, WidthMm } from './figure';
import { velocityPdfFigure } from './velocity-pdf-figure';

/** A figure of an analysis: its file name, what it shows in one sentence, how to draw it, the numbers behind it. */
export interface AnalysisFigure {
  name: string;
  title: string;
  draw(widthMm: WidthMm): Figure | null;
  table: ChartTable;
}

type Measures = Pick<MeasuresView, 'pdfs' | 'motion' | 'estimates'>;

/** Components of the flow where its direction is known, else those of the image. */
const MOST_COMPONENTS = 2;
const LAG = { name: [{ text: 'lag' }], unit: 'ms' };

/** Every figure that an analysis has, from the series that its page plots. */
export function analysisFigures(measures: Measures): AnalysisFigure[] {
  return [...pdfFigures(measures), ...motionFigures(measures), ...estimateFigures(measures)];
}

function pdfFigures({ pdfs }: Measures): AnalysisFigure[] {
  const [lag] = lagsOf(pdfs);
  if (!lag) return [];
  return componentsOf(pdfs)
    .slice(0, MOST_COMPONENTS)
    .flatMap((component) => {
      const shown = pdfsAt(pdfs, component, lag.lagFrames);
      if (shown.length === 0) return [];
      const series = shown.map(pdfSeries);
      const title = pdfSentence(shown, component, lag.lagS);
      const draw = (widthMm: WidthMm) => velocityPdfFigure(widthMm, series, component, title);
      return [{ name: `velocity-pdf-${component}`, title, draw, table: pdfTable(series) }];
    });
}

function motionFigures({ motion }: Measures): AnalysisFigure[] {
  if (!motion) return [];
  const spreading = motionComponents(motion.displacements)
    .slice(0, MOST_COMPONENTS)
    .flatMap((component): AnalysisFigure[] => {
      // prettier-ignore
      const curves = toldApart(motion.displacements.filter((one) => one.component === component)).map(spreadCurve); // prettier-ignore
      const ranges = logRanges(curves);
      if (!ranges) return [];
      const y = { name: [{ text: 'mean squared displacement' }], unit: '\u00b5m^2' };
      const title = `Mean squared displacement against lag, component ${component}, localization noise taken out.`;
      const draw = (widthMm: WidthMm) => curveFigure(widthMm, curves, ranges, { x: LAG, y }, title);
      const table = curveTable(curves, { words: 'lag', unit: 'ms' }, { words: 'mean squared displacement', unit: '\u00b5m^2' }); // prettier-ignore
      return [{ name: `mean-squared-displacement-${component}`, title, draw, table }];
    });
  const memory = motionComponents(motion.autocorrelations)
    .slice(0, MOST_COMPONENTS)
    .flatMap((component): AnalysisFigure[] => {
      // prettier-ignore
      const curves = toldApart(motion.autocorrelations.filter((one) => one.component === component)).map(memoryCurve); // prettier-ignore
      if (curves.length === 0) return [];
      const ranges = memoryRanges(curves);
      const y = { name: [{ text: 'velocity autocorrelation' }], unit: '' };
      const title = `Velocity autocorrelation against lag, component ${component}.`;
      const draw = (widthMm: WidthMm) => curveFigure(widthMm, curves, ranges, { x: LAG, y }, title, 0);
      const table = curveTable(curves, { words: 'lag', unit: 'ms' }, { words: 'velocity autocorrelation', unit: '' }); // prettier-ignore
      return [{ name: `velocity-autocorrelation-${component}`, title, draw, table }];
    });
  return [...spreading, ...memory];
}

function estimateFigures({ estimates }: Measures): AnalysisFigure[] {
  const quantities = [
    { quantity: 'line_density', name: 'line-density', words: 'Line density', axis: [{ text: 'line density ' }, { text: 'L', face: 'italic' as const }], unit: DENSITY_UNIT }, // prettier-ignore
    { quantity: 'line_spacing', name: 'line-spacing', words: 'Line spacing', axis: [{ text: 'line spacing ' }, { text: 'l', face: 'italic' as const }], unit: SPACING_UNIT }, // prettier-ignore
  ];
  return quantities.flatMap(({ quantity, name, words, axis, unit }) => {
    const rows = estimateRows(estimates, quantity, unit);
    if (!rows.some(({ value }) => value !== null)) return [];
    const title = `${words} by each method with its interval; a ring is a prior or was left out of the combined value.`;
    const draw = (widthMm: WidthMm) =>
      estimatesFigure(widthMm, rows, { name: axis, unit: unit.unit, siPerUnit: unit.siPerUnit }, title);
    const table: ChartTable = {
      columns: [{ name: 'method' }, { name: words.toLowerCase(), unit: unit.unit }, { name: 'low, 95 %', unit: unit.unit }, { name: 'high, 95 %', unit: unit.unit }], // prettier-ignore
      rows: rows.map((row) => [row.method, ...[row.value, row.low, row.high].map((si) => (si === null ? null : si / unit.siPerUnit))]), // prettier-ignore
    };
    return [{ name, title, draw, table }];
  });
}
