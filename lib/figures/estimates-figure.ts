import type { EstimateRow } from '../charts/estimate-rows';
import { axisAround, logGrid, shareOnLogAxis, type ThreadInterval } from '../charts/log-axis';
import { named } from './axes';
import { circlePath, PT_PER_MM, rounded, type Figure, type PathMark, type TextMark, type TextRun, type WidthMm } from './figure'; // prettier-ignore
import { PAPER, SIZES } from './paper';

const ROW = 15;
const TOP = 20;
const FOOT = 30;
const NAMES: Record<WidthMm, number> = { 86: 96, 178: 150 };
const RIGHT = 10;

/**
 * Estimates of one quantity by each method on one logarithmic axis: bead = value, thick thread = chance alone,
 * thin = with what is systematic, ring = a prior or left out of the combined value.
 * @returns null where no method has a value
 */
export function estimatesFigure(
  widthMm: WidthMm,
  rows: readonly EstimateRow[],
  { name, unit, siPerUnit }: { name: readonly TextRun[]; unit: string; siPerUnit: number },
  title: string,
): Figure | null {
  const shown = rows.flatMap((row) => (row.value === null ? [] : [{ row, thread: threadOf(row, row.value, siPerUnit) }])); // prettier-ignore
  const axis = axisAround(shown.map(({ thread }) => thread));
  if (!axis) return null;
  const widthPt = widthMm * PT_PER_MM;
  const bottom = TOP + shown.length * ROW;
  const heightPt = bottom + FOOT;
  const [left, right] = [NAMES[widthMm], widthPt - RIGHT];
  const x = (value: number) => left + shareOnLogAxis(value, axis) * (right - left);
  const line = (d: string, strokePt: number, stroke: string = PAPER.ink): PathMark => ({ kind: 'path', d, stroke, strokePt }); // prettier-ignore
  const grid = logGrid(axis).flatMap((value): (PathMark | TextMark)[] => [
    line(`M${rounded(x(value))} ${TOP - 4}L${rounded(x(value))} ${rounded(bottom)}`, SIZES.grid, PAPER.grid),
    { kind: 'text', x: x(value), y: bottom + 10, runs: [{ text: plain(value) }], sizePt: SIZES.ticks, anchor: 'middle', colour: PAPER.quiet }, // prettier-ignore
  ]);
  const threads = shown.flatMap(({ row, thread }, i): (PathMark | TextMark)[] => {
    const y = TOP + (i + 0.5) * ROW;
    const across = (from: number, to: number) => `M${rounded(x(from))} ${rounded(y)}L${rounded(x(to))} ${rounded(y)}`; // prettier-ignore
    const wide = thread.wideLow != null && thread.wideHigh != null ? [line(across(thread.wideLow, thread.wideHigh), 0.7)] : []; // prettier-ignore
    const bead: PathMark = thread.hollow
      ? { kind: 'path', d: circlePath(x(thread.value), y, 2.6), fill: PAPER.white, stroke: PAPER.ink, strokePt: 1 } // prettier-ignore
      : { kind: 'path', d: circlePath(x(thread.value), y, 2.6), fill: PAPER.ink };
    return [
      { kind: 'text', x: left - 8, y: y + 2.7, runs: [{ text: row.method, face: row.combined ? 'strong' : 'sans' }], sizePt: SIZES.text, anchor: 'end', colour: PAPER.ink }, // prettier-ignore
      ...wide,
      line(across(thread.low, thread.high), 1.9),
      bead,
    ];
  });
  const foot: (PathMark | TextMark)[] = [
    line(
      `M${rounded(left)} ${rounded(bottom)}L${rounded(right)} ${rounded(bottom)}`,
      SIZES.axis,
      PAPER.quiet,
    ),
    { kind: 'text', x: right, y: bottom + 24, runs: named({ name, unit }), sizePt: SIZES.text, anchor: 'end', colour: PAPER.ink }, // prettier-ignore
  ];
  return {
    widthPt,
    heightPt,
    clip: { x: 0, y: 0, width: widthPt, height: heightPt },
    marks: [...grid, ...foot, ...threads],
    title,
  };
}

function threadOf(row: EstimateRow, value: number, siPerUnit: number): ThreadInterval {
  const scaled = (si: number | null | undefined) => (si == null ? null : si / siPerUnit);
  return {
    value: value / siPerUnit,
    low: scaled(row.low) ?? value / siPerUnit,
    high: scaled(row.high) ?? value / siPerUnit,
    wideLow: scaled(row.wideLow),
    wideHigh: scaled(row.wideHigh),
    hollow: row.hollow,
  };
}

const plain = (value: number) => String(Number(value.toPrecision(2)));
