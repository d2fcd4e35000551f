import {
  rounded,
  SHIFT,
  type Figure,
  type PathMark,
  type TextMark,
  type TextRun,
} from '@/lib/figures/figure';
import { figureFace } from './figure-faces';

/** The same figure with every text as outlines of its letters: it looks alike where no font can be had. */
export function outlined(figure: Figure): Figure {
  return { ...figure, marks: figure.marks.map((mark) => (mark.kind === 'text' ? outlineOf(mark) : mark)) };
}

const sizeOf = (run: TextRun, sizePt: number) => (run.shift ? SHIFT[run.shift].size * sizePt : sizePt);

/** Width of a stretch of text, points. */
export function runWidth(run: TextRun, sizePt: number): number {
  const { font } = figureFace(run.face ?? 'sans');
  return (font.layout(run.text).advanceWidth / font.unitsPerEm) * sizeOf(run, sizePt);
}

function outlineOf({ x, y, runs, sizePt, anchor, colour }: TextMark): PathMark {
  const width = runs.reduce((sum, run) => sum + runWidth(run, sizePt), 0);
  let at = anchor === 'start' ? x : anchor === 'middle' ? x - width / 2 : x - width;
  let d = '';
  for (const run of runs) {
    const { font } = figureFace(run.face ?? 'sans');
    const scale = sizeOf(run, sizePt) / font.unitsPerEm;
    const baseline = y - (run.shift ? SHIFT[run.shift].up * sizePt : 0);
    const { glyphs, positions } = font.layout(run.text);
    glyphs.forEach((glyph, i) => {
      const { xAdvance, xOffset, yOffset } = positions[i];
      const left = at + xOffset * scale;
      const foot = baseline - yOffset * scale;
      d += glyphPath(glyph.path.commands, (px, py) => `${rounded(left + px * scale)} ${rounded(foot - py * scale)}`); // prettier-ignore
      at += xAdvance * scale;
    });
  }
  return { kind: 'path', d, fill: colour };
}

const LETTERS = { moveTo: 'M', lineTo: 'L', quadraticCurveTo: 'Q', bezierCurveTo: 'C', closePath: 'Z' };

function glyphPath(
  commands: readonly { command: string; args: number[] }[],
  place: (x: number, y: number) => string,
): string {
  return commands
    .map(({ command, args }) => {
      const points = [];
      for (let i = 0; i < args.length; i += 2) points.push(place(args[i], args[i + 1]));
      return LETTERS[command as keyof typeof LETTERS] + points.join(' ');
    })
    .join('');
}
