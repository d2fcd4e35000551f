import sharp from 'sharp';
import { type FrameLayout } from '../frame-layout';
import { STACK_LIMITS } from '../limits';
import { checkPngChunks } from './check-png';

/** How the decoder must be asked so that no sample is rescaled. */
function pipelineFor(file: Uint8Array, layout: FrameLayout) {
  const image = sharp(file, { limitInputPixels: STACK_LIMITS.pixelsPerPage, failOn: 'warning' });
  const grey = layout.samplesPerPixel <= 2;
  // Left alone, 16-bit grey would come out as three 8-bit channels.
  if (layout.bits === 16) return image.toColourspace(grey ? 'grey16' : 'rgb16').raw({ depth: 'ushort' });
  return image.toColourspace(grey ? 'b-w' : 'srgb').raw({ depth: 'uchar' });
}

/**
 * Samples of a PNG file, channels interleaved, `width * height * layout.samplesPerPixel` of them.
 * @throws RangeError when the file is damaged or has another size or number of channels.
 */
export async function decodePng(
  file: Uint8Array,
  layout: FrameLayout,
  width: number,
  height: number,
): Promise<Float32Array> {
  checkPngChunks(file);
  const { data, info } = await pipelineFor(file, layout).toBuffer({ resolveWithObject: true });
  if (info.width !== width || info.height !== height || info.channels !== layout.samplesPerPixel) {
    throw new RangeError('The PNG frame has another size than its header says.');
  }
  if (layout.bits === 16) {
    return Float32Array.from(new Uint16Array(data.buffer, data.byteOffset, data.byteLength / 2));
  }
  return Float32Array.from(data);
}
