import sharp from 'sharp';
import { type Film, filmRows } from '@/lib/review/film';
import { greyImage } from './grey-image';
import type { StackReader } from './open-stack';

/** Hides no tracer and is small enough to be fetched ahead. */
const WEBP = { quality: 88, effort: 0 } as const;

/**
 * All frames of a film in one picture, in rows, each cut to its square, pixel for pixel.
 * @returns the encoded file: `image/webp` or `image/png`
 */
export async function makeFilmPicture(
  reader: StackReader,
  film: Film,
  { low, high }: { low: number; high: number },
  format: 'webp' | 'png',
): Promise<Buffer> {
  const { firstFrame, frames, leftPx, topPx, sizePx, columns } = film;
  const [width, height] = [columns * sizePx, filmRows(film) * sizePx];
  const bytes = Buffer.alloc(width * height);
  for (let i = 0; i < frames; i++) {
    const cut = await greyImage(await reader.readFrame(firstFrame + i), low, high)
      .extract({ left: leftPx, top: topPx, width: sizePx, height: sizePx })
      .raw()
      .toBuffer();
    const [x, y] = [(i % columns) * sizePx, Math.floor(i / columns) * sizePx];
    for (let row = 0; row < sizePx; row++) {
      cut.copy(bytes, (y + row) * width + x, row * sizePx, (row + 1) * sizePx);
    }
  }
  const image = sharp(bytes, { raw: { width, height, channels: 1 } }).toColourspace('b-w');
  return format === 'webp' ? image.webp(WEBP).toBuffer() : image.png({ compressionLevel: 3 }).toBuffer();
}
