import { SHIFT, rounded, type Figure, type FigureFace, type PathMark, type TextMark } from './figure';

/** A face that travels inside the file. */
export interface EmbeddedFace {
  family: string;
  /** TrueType, base64. */
  base64: string;
}

const FAMILY: Record<FigureFace, string> = {
  sans: "'Source Sans 3', sans-serif",
  strong: "'Source Sans 3 Semibold', 'Source Sans 3', sans-serif",
  italic: "'STIX Two Text', serif",
};

/** A figure as an SVG file with its fonts inside. Without faces, texts must have been turned into outlines before. */
export function figureSvg(
  figure: Figure,
  faces: readonly EmbeddedFace[],
  lengthUnit: 'pt' | '' = 'pt',
): string {
  const { widthPt, heightPt, clip, marks, title } = figure;
  const [width, height] = [rounded(widthPt), rounded(heightPt)];
  const fonts = faces
    .map(
      ({ family, base64 }) =>
        `@font-face{font-family:'${family}';src:url(data:font/ttf;base64,${base64}) format('truetype')}`,
    ) // prettier-ignore
    .join('');
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${width}${lengthUnit}" height="${height}${lengthUnit}" viewBox="0 0 ${width} ${height}" role="img">`,
    `<title>${escaped(title)}</title>`,
    fonts ? `<style>${fonts}</style>` : '',
    `<clipPath id="axes"><rect x="${rounded(clip.x)}" y="${rounded(clip.y)}" width="${rounded(clip.width)}" height="${rounded(clip.height)}"/></clipPath>`,
    `<rect width="${width}" height="${height}" fill="#FFFFFF"/>`,
    ...marks.map((mark) => (mark.kind === 'path' ? pathSvg(mark) : textSvg(mark))),
    '</svg>\n',
  ]
    .filter((line) => line !== '')
    .join('\n');
}

function pathSvg({ d, fill, fillOpacity, stroke, strokePt, dash, clipped }: PathMark): string {
  const attributes = [
    `fill="${fill ?? 'none'}"`,
    fillOpacity === undefined ? '' : `fill-opacity="${fillOpacity}"`,
    stroke ? `stroke="${stroke}" stroke-width="${strokePt ?? 1}" stroke-linejoin="round"` : '',
    dash ? `stroke-dasharray="${dash.join(' ')}"` : '',
    clipped ? 'clip-path="url(#axes)"' : '',
  ];
  return `<path d="${d}" ${attributes.filter(Boolean).join(' ')}/>`;
}

function textSvg({ x, y, runs, sizePt, anchor, colour }: TextMark): string {
  let raisedPt = 0;
  const spans = runs.map(({ text, face = 'sans', shift }) => {
    const upPt = shift ? SHIFT[shift].up * sizePt : 0;
    const size = shift ? ` font-size="${rounded(SHIFT[shift].size * sizePt)}"` : '';
    const dy = upPt === raisedPt ? '' : ` dy="${rounded(raisedPt - upPt)}"`;
    raisedPt = upPt;
    return `<tspan font-family="${FAMILY[face]}"${face === 'italic' ? ' font-style="italic"' : ''}${size}${dy}>${escaped(text)}</tspan>`;
  });
  return `<text x="${rounded(x)}" y="${rounded(y)}" font-size="${sizePt}" text-anchor="${anchor}" fill="${colour}" xml:space="preserve">${spans.join('')}</text>`;
}

const escaped = (text: string) =>
  text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;');
