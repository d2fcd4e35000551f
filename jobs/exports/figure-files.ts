import sharp from 'sharp';
import type { Figure, FigureFace } from '@/lib/figures/figure';
import { figureSvg } from '@/lib/figures/figure-svg';
import { embeddedFaces } from './figure-faces';
import { figurePdf } from './figure-pdf';
import { outlined } from './outline-text';

/** Dots per inch that journals ask of line art with text. */
const DPI = 600;

export const FIGURE_ENDINGS = ['svg', 'pdf', 'png'] as const;
export type FigureEnding = (typeof FIGURE_ENDINGS)[number];

/** A figure as a file: vectors with the fonts inside, or a picture at 600 dpi. */
export async function figureFile(figure: Figure, ending: FigureEnding): Promise<Buffer> {
  if (ending === 'pdf') return figurePdf(figure);
  if (ending === 'svg') return Buffer.from(figureSvg(figure, embeddedFaces(facesIn(figure))));
  // Letters become outlines first: what draws SVG here knows no fonts but those of the machine.
  // The density is that of a length without unit; a length in points would be scaled twice.
  const svg = Buffer.from(figureSvg(outlined(figure), [], ''));
  return sharp(svg, { density: DPI }).flatten({ background: '#FFFFFF' }).withMetadata({ density: DPI }).png({ compressionLevel: 6 }).toBuffer(); // prettier-ignore
}

function facesIn({ marks }: Figure): Set<FigureFace> {
  const texts = marks.flatMap((mark) => (mark.kind === 'text' ? [mark] : []));
  return new Set(texts.flatMap(({ runs }) => runs.map(({ face = 'sans' }) => face)));
}
