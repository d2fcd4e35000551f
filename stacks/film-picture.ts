import sharp from 'sharp';
import type { Frame } from '@/tracking/types';
import { type Film, filmRows } from '@/lib/review/film';
import { cutFrame } from './cut-frame';
import type { StackReader } from './open-stack';
import { stretchToBytes } from './stretch';

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
  const { firstFrame, frames, sizePx, columns } = film;
  const [width, height] = [columns * sizePx, filmRows(film) * sizePx];
  const bytes = new Uint8Array(width * height);
  let room: Frame | undefined;
  for (let i = 0; i < frames; i++) {
    room = await reader.readFrame(firstFrame + i, room);
    const cut = stretchToBytes(cutFrame(room, film).counts, low, high);
    const [x, y] = [(i % columns) * sizePx, Math.floor(i / columns) * sizePx];
    for (let row = 0; row < sizePx; row++) {
      bytes.set(cut.subarray(row * sizePx, (row + 1) * sizePx), (y + row) * width + x);
    }
  }
  const image = sharp(bytes, { raw: { width, height, channels: 1 } }).toColourspace('b-w');
  return format === 'webp' ? image.webp(WEBP).toBuffer() : image.png({ compressionLevel: 3 }).toBuffer();
}
