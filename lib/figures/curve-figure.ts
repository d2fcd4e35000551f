import type { AxisRange } from '../charts/axis-ticks';
import { DRAWING_ORDER, type Curve } from '../charts/curve';
import { drawAxes, type FigureAxis } from './axes';
import { linePath, type Figure, type PathMark, type WidthMm } from './figure';
import { PAPER, POPULATION_STROKES } from './paper';
import { legendMarks, strokeMarks } from './populations-legend';

/** A quantity against the lag for each population with 95 % bands, from the curves that the analysis page plots. */
export function curveFigure(
  widthMm: WidthMm,
  curves: readonly Curve[],
  ranges: { x: AxisRange; y: AxisRange },
  names: { x: Pick<FigureAxis, 'name' | 'unit'>; y: Pick<FigureAxis, 'name' | 'unit'> },
  title: string,
  level?: number,
): Figure {
  const drawn = DRAWING_ORDER.flatMap((population) => curves.filter((one) => one.population === population));
  const axes = drawAxes(widthMm, { ...ranges.x, ...names.x }, { ...ranges.y, ...names.y }, drawn.length);
  const bands = drawn.map(({ population, points }): PathMark => {
    const shown = points.filter((point) => point.low !== null && point.high !== null);
    const at = (value: number) => {
      const y = axes.y(value);
      return Number.isFinite(y) ? Math.min(axes.bottom, y) : axes.bottom;
    };
    const up = shown.map((point) => [axes.x(point.x), at(point.high!)] as const);
    const down = shown.map((point) => [axes.x(point.x), at(point.low!)] as const).reverse();
    const fillOpacity = population === 'undecided' ? 0.1 : 0.2;
    return { kind: 'path', d: shown.length > 0 ? `${linePath([...up, ...down])}Z` : '', fill: POPULATION_STROKES[population].colour, fillOpacity, clipped: true }; // prettier-ignore
  });
  const strokes = drawn.flatMap(({ population, points }) =>
    strokeMarks(
      population,
      points.map(({ x, y }) => (y === null ? null : [axes.x(x), axes.y(y)])),
    ),
  );
  const { left, top, right, bottom } = axes;
  const levelMark: PathMark[] =
    level === undefined
      ? []
      : [{ kind: 'path', d: linePath([[left, axes.y(level)], [right, axes.y(level)]]), stroke: PAPER.quiet, strokePt: 0.5, dash: [1.5, 2.5] }]; // prettier-ignore
  const legend = legendMarks(
    axes,
    [...drawn].reverse().map(({ population, finding }) => ({
      population,
      words: finding ? `${population}, ${finding}` : population,
    })),
  );
  return {
    widthPt: axes.widthPt,
    heightPt: axes.heightPt,
    clip: { x: left, y: top - 3, width: right - left, height: bottom - top + 3 },
    marks: [...axes.marks, ...levelMark, ...bands.filter(({ d }) => d !== ''), ...strokes, ...legend],
    title,
  };
}
