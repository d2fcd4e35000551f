import { DRAWING_ORDER } from '../charts/curve';
import { kernelPoints } from '../charts/kernel-curve';
import { pdfBands, pdfPoints, pdfRanges, type PdfComponent, type PdfSeries } from '../charts/pdf-series';
import { drawAxes } from './axes';
import { linePath, rounded, type Figure, type PathMark, type WidthMm } from './figure';
import { PAPER, POPULATION_STROKES } from './paper';
import { legendMarks, strokeMarks } from './populations-legend';

/**
 * Velocity densities on a logarithmic axis with 95 % bands, from the series that the analysis page plots.
 * @returns null where no velocity was measured
 */
export function velocityPdfFigure(
  widthMm: WidthMm,
  series: readonly PdfSeries[],
  component: PdfComponent,
  title: string,
): Figure | null {
  const ranges = pdfRanges(series, true, component);
  if (!ranges) return null;
  const name =
    component === 'speed'
      ? [{ text: 'speed' }]
      : [{ text: 'v', face: 'italic' as const }, { text: component, face: component.length === 1 ? ('italic' as const) : undefined, shift: 'sub' as const }]; // prettier-ignore
  const drawn = DRAWING_ORDER.flatMap((population) => series.filter((one) => one.population === population));
  const axes = drawAxes(
    widthMm,
    { ...ranges.x, name, unit: 'mm/s' },
    { ...ranges.y, name: [{ text: 'probability density' }], unit: 's/mm' },
    drawn.length,
  );
  const bands = drawn.flatMap(({ population, bins }) =>
    pdfBands(bins).map((rows): PathMark => {
      // Ends that a log axis can't place lie on its floor.
      const at = (value: number) => (value > 0 ? Math.min(axes.bottom, axes.y(value)) : axes.bottom);
      const up = rows.map((row) => [axes.x(row.x), at(row.high)] as const);
      const down = rows.map((row) => [axes.x(row.x), at(row.low)] as const).reverse();
      const fillOpacity = population === 'undecided' ? 0.1 : 0.2;
      return { kind: 'path', d: `${linePath([...up, ...down])}Z`, fill: POPULATION_STROKES[population].colour, fillOpacity, clipped: true }; // prettier-ignore
    }),
  );
  const strokes = drawn.flatMap(({ population, bins }) =>
    strokeMarks(
      population,
      pdfPoints(bins, true).map(({ x, y }) => (y === null ? null : [axes.x(x), axes.y(y)])),
    ),
  );
  const floor = drawn.flatMap(({ population, bins }): PathMark[] => {
    const empty = bins.filter((bin) => bin.count === 0);
    if (empty.length === 0) return [];
    const d = pdfPoints(empty, false).map(({ x }) => triangle(axes.x(x), axes.bottom)).join(''); // prettier-ignore
    return [{ kind: 'path', d, stroke: POPULATION_STROKES[population].colour, strokePt: 0.5, clipped: true }];
  });
  const hairlines = drawn.flatMap(({ kernel }): PathMark[] => {
    if (!kernel) return [];
    // What a log axis can't place breaks the line.
    const points = kernelPoints(kernel).map(({ x, y }) => (y > 0 ? ([axes.x(x), axes.y(y)] as const) : null));
    return [{ kind: 'path', d: linePath(points), stroke: PAPER.ink, strokePt: 0.5, clipped: true }]; // prettier-ignore
  });
  const legend = legendMarks(
    axes,
    [...drawn].reverse().map(({ population, finding }) => ({
      population,
      words: finding ? `${population}, ${finding}` : population,
    })),
  );
  const { left, top, right, bottom } = axes;
  return {
    widthPt: axes.widthPt,
    heightPt: axes.heightPt,
    clip: { x: left, y: top - 3, width: right - left, height: bottom - top + 3 },
    marks: [...axes.marks, ...bands, ...floor, ...strokes, ...hairlines, ...legend],
    title,
  };
}

/** An empty bin on a log axis: a small open triangle on the floor. */
const triangle = (x: number, bottom: number) =>
  `M${rounded(x - 1.4)} ${rounded(bottom - 3.6)}L${rounded(x + 1.4)} ${rounded(bottom - 3.6)}L${rounded(x)} ${rounded(bottom - 1.2)}Z`;
