/** Faces that ship with the product, by the part that they play. */
export type FigureFace = 'sans' | 'strong' | 'italic';

/** A stretch of text in one face; raised and lowered stretches are smaller. */
export interface TextRun {
  text: string;
  face?: FigureFace;
  shift?: 'super' | 'sub';
}

export interface PathMark {
  kind: 'path';
  /** SVG path data in points, absolute commands M, L, C, Z. */
  d: string;
  fill?: string;
  fillOpacity?: number;
  stroke?: string;
  strokePt?: number;
  dash?: readonly number[];
  /** Hidden outside the axes. */
  clipped?: boolean;
}

export interface TextMark {
  kind: 'text';
  x: number;
  /** Of the baseline. */
  y: number;
  runs: readonly TextRun[];
  sizePt: number;
  anchor: 'start' | 'middle' | 'end';
  colour: string;
}

/** A figure as it is printed: what to draw, back to front, in points from the top left corner. */
export interface Figure {
  widthPt: number;
  heightPt: number;
  /** Area of the axes, to which clipped marks keep. */
  clip: { x: number; y: number; width: number; height: number };
  marks: readonly (PathMark | TextMark)[];
  /** One sentence that says what it shows. */
  title: string;
}

/** Column widths of journals. */
export const WIDTHS_MM = [86, 178] as const;
export type WidthMm = (typeof WIDTHS_MM)[number];

export const PT_PER_MM = 72 / 25.4;

/** Shifts and sizes of raised and lowered text, in units of the text's size. */
export const SHIFT = { super: { up: 0.36, size: 0.7 }, sub: { up: -0.16, size: 0.7 } } as const;

/** A closed circle as path data. */
export function circlePath(x: number, y: number, r: number): string {
  // Four cubic curves; this handle makes the best circle of them.
  const k = 0.5522847 * r;
  const at = (...values: number[]) => values.map(rounded).join(' ');
  return `M${at(x - r, y)}C${at(x - r, y - k, x - k, y - r, x, y - r)}C${at(x + k, y - r, x + r, y - k, x + r, y)}C${at(x + r, y + k, x + k, y + r, x, y + r)}C${at(x - k, y + r, x - r, y + k, x - r, y)}Z`;
}

/** A hundredth of a point is finer than any printer, and the same text on every machine. */
export const rounded = (value: number): string => String(Number(value.toFixed(2)));

/** A line through points; unknown ones break it. */
export function linePath(points: readonly (readonly [x: number, y: number] | null)[]): string {
  let path = '';
  let drawing = false;
  for (const point of points) {
    if (!point || !Number.isFinite(point[0]) || !Number.isFinite(point[1])) {
      drawing = false;
      continue;
    }
    path += `${drawing ? 'L' : 'M'}${rounded(point[0])} ${rounded(point[1])}`;
    drawing = true;
  }
  return path;
}
