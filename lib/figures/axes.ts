import { axisTicks, showsPowers, type AxisRange } from '../charts/axis-ticks';
import { unitPieces } from '../format/unit';
import {
  linePath,
  PT_PER_MM,
  rounded,
  type PathMark,
  type TextMark,
  type TextRun,
  type WidthMm,
} from './figure';
import { PAPER, SIZES } from './paper';

export interface FigureAxis extends AxisRange {
  name: readonly TextRun[];
  unit: string;
}

/** Where data go: places in points for values of both axes, and the marks of the axes themselves. */
export interface Axes {
  widthPt: number;
  heightPt: number;
  left: number;
  right: number;
  top: number;
  bottom: number;
  x(value: number): number;
  y(value: number): number;
  marks: (PathMark | TextMark)[];
}

const LEFT = 34;
const RIGHT = 8;
const TOP = 18;
const BOTTOM = 31;
/** Where the legend begins, and the height of its lines. */
export const LEGEND_TOP = 6;
export const LEGEND_LINE = 10.5;
/** A column is drawn 3 : 2 or a little taller, a page wider than that. */
const HEIGHT_SHARE: Record<WidthMm, number> = { 86: 0.72, 178: 0.46 };

const place = ({ min, max, log }: AxisRange, from: number, to: number) =>
  log
    ? (value: number) => from + (Math.log(value / min) / Math.log(max / min)) * (to - from)
    : (value: number) => from + ((value - min) / (max - min)) * (to - from);

/**
 * Axes at the left and at the foot, ticks outwards, a horizontal grid, the names at their ends.
 * @param legendLines lines of the legend, which stands over the axes so that it hides no data
 */
export function drawAxes(widthMm: WidthMm, x: FigureAxis, y: FigureAxis, legendLines: number): Axes {
  const widthPt = widthMm * PT_PER_MM;
  const heightPt = widthPt * HEIGHT_SHARE[widthMm];
  const head = Math.max(TOP, LEGEND_TOP + legendLines * LEGEND_LINE);
  const [left, right, top, bottom] = [LEFT, widthPt - RIGHT, head, heightPt - BOTTOM];
  const atX = place(x, left, right);
  const atY = place(y, bottom, top);
  const parts = widthMm > 100 ? 8 : 5;
  const [ticksX, ticksY] = [axisTicks(x, parts), axisTicks(y, 5)];
  const line = (d: string, strokePt: number, stroke: string = PAPER.quiet): PathMark => ({ kind: 'path', d, stroke, strokePt }); // prettier-ignore
  const marks: (PathMark | TextMark)[] = [
    ...ticksY.major.map((value) => line(linePath([[left, atY(value)], [right, atY(value)]]), SIZES.grid, PAPER.grid)), // prettier-ignore
    line(linePath([[left, top], [left, bottom], [right, bottom]]), SIZES.axis), // prettier-ignore
    ...ticksX.major.map((value) => line(tickX(atX(value), bottom, SIZES.tick), SIZES.axis)),
    ...ticksX.minor.map((value) => line(tickX(atX(value), bottom, SIZES.minorTick), SIZES.axis)),
    ...ticksY.major.map((value) => line(tickY(left, atY(value), SIZES.tick), SIZES.axis)),
    ...ticksY.minor.map((value) => line(tickY(left, atY(value), SIZES.minorTick), SIZES.axis)),
    ...ticksX.major.map((value) => numberMark(value, x, { x: atX(value), y: bottom + 11, anchor: 'middle' })),
    ...ticksY.major.map((value) => numberMark(value, y, { x: left - 5, y: atY(value) + 2.4, anchor: 'end' })),
    { kind: 'text', x: 2, y: 9, runs: named(y), sizePt: SIZES.text, anchor: 'start', colour: PAPER.ink },
    { kind: 'text', x: right, y: bottom + 24, runs: named(x), sizePt: SIZES.text, anchor: 'end', colour: PAPER.ink }, // prettier-ignore
  ];
  return { widthPt, heightPt, left, right, top, bottom, x: atX, y: atY, marks };
}

const tickX = (x: number, bottom: number, length: number) =>
  `M${rounded(x)} ${rounded(bottom)}L${rounded(x)} ${rounded(bottom + length)}`;
const tickY = (left: number, y: number, length: number) =>
  `M${rounded(left)} ${rounded(y)}L${rounded(left - length)} ${rounded(y)}`;

function numberMark(value: number, axis: AxisRange, at: Pick<TextMark, 'x' | 'y' | 'anchor'>): TextMark {
  const runs = showsPowers(axis)
    ? [{ text: '10' }, { text: signed(Math.round(Math.log10(value))), shift: 'super' as const }]
    : [{ text: signed(value) }];
  return { kind: 'text', ...at, runs, sizePt: SIZES.ticks, colour: PAPER.quiet };
}

const signed = (value: number) => String(value).replace('-', '\u2212');

/** Name, comma, unit with its exponents raised. */
export function named({ name, unit }: Pick<FigureAxis, 'name' | 'unit'>): TextRun[] {
  if (unit === '') return [...name];
  const pieces = unitPieces(unit).map(({ text, raised }): TextRun => (raised ? { text, shift: 'super' } : { text })); // prettier-ignore
  return [...name, { text: ' (' }, ...pieces, { text: ')' }];
}
