import { type FrameLayout } from '../frame-layout';
import { StackRefusal } from '../refusal';
import { TAG } from './tiff-tags';
import { type TiffDirectory, type TiffFile } from './tiff-file';

/**
 * The 16-bit counts that palette numbers stand for in the chosen colour, or in the mean of the three.
 * @throws StackRefusal SAMPLE_FORMAT unless it is a complete palette of 8-bit numbers.
 */
export async function paletteCounts(
  file: TiffFile,
  { fields }: TiffDirectory,
  bits: number,
  channel: FrameLayout['channel'],
): Promise<number[]> {
  const map = await file.readNumbers(fields.get(TAG.colourMap), 3 * 256);
  if (bits !== 8 || map.length !== 3 * 256) {
    throw new StackRefusal('SAMPLE_FORMAT', `A palette of ${bits}-bit numbers is not supported.`);
  }
  return Array.from({ length: 256 }, (_, i) => {
    const rgb = [map[i]!, map[256 + i]!, map[512 + i]!];
    return channel === 'mean' ? (rgb[0]! + rgb[1]! + rgb[2]!) / 3 : rgb[channel]!;
  });
}
