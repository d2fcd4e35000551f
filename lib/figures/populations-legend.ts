import type { PlottedPopulation } from '../charts/curve';
import { circlePath, linePath, type PathMark, type TextMark } from './figure';
import { LEGEND_LINE, LEGEND_TOP, type Axes } from './axes';
import { PAPER, POPULATION_STROKES, SIZES } from './paper';

const SAMPLE = 18;

/** The stroke of a population through points in page places. */
export function strokeMarks(
  population: PlottedPopulation,
  points: readonly (readonly [number, number] | null)[],
  clipped = true,
): PathMark[] {
  const { colour, widthPt, dash, beadPt } = POPULATION_STROKES[population];
  const line: PathMark = {
    kind: 'path',
    d: linePath(points),
    stroke: colour,
    strokePt: widthPt,
    dash,
    clipped,
  };
  if (!beadPt) return [line];
  const beads = points.flatMap((point) =>
    point && Number.isFinite(point[1]) ? [circlePath(point[0], point[1], beadPt)] : [],
  );
  return [line, { kind: 'path', d: beads.join(''), fill: colour, clipped }];
}

/** Samples of the strokes with their names and what was found, over the axes at the right. */
export function legendMarks(
  axes: Pick<Axes, 'right'>,
  entries: readonly { population: PlottedPopulation; words: string }[],
): (PathMark | TextMark)[] {
  return entries.flatMap(({ population, words }, i) => {
    const y = LEGEND_TOP + i * LEGEND_LINE;
    const from = axes.right - SAMPLE;
    const sample = strokeMarks(population, [[from, y], [from + SAMPLE / 2, y], [axes.right, y]], false); // prettier-ignore
    const text: TextMark = { kind: 'text', x: from - 4, y: y + 2.5, runs: [{ text: words }], sizePt: SIZES.ticks, anchor: 'end', colour: PAPER.ink }; // prettier-ignore
    return [...sample, text];
  });
}
