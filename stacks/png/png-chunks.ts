import { crc32 } from '../crc32';

export interface PngChunk {
  type: string;
  data: Uint8Array;
}

/**
 * The chunks of a PNG file up to its end chunk (PNG third edition, 5.3), each checksum checked, so
 * that no damaged frame is read as if it were sound.
 * @throws RangeError when a chunk is cut, its checksum differs, or the end chunk is missing.
 */
export function pngChunks(file: Uint8Array): PngChunk[] {
  const view = new DataView(file.buffer, file.byteOffset, file.byteLength);
  const chunks: PngChunk[] = [];
  let at = 8;
  while (at + 12 <= file.byteLength) {
    const end = at + 12 + view.getUint32(at);
    if (end > file.byteLength) throw new RangeError('A PNG chunk is cut.');
    if (crc32(file.subarray(at + 4, end - 4)) !== view.getUint32(end - 4)) {
      throw new RangeError('The checksum of a PNG chunk differs.');
    }
    const type = Buffer.from(file.buffer, file.byteOffset + at + 4, 4).toString('latin1');
    if (type === 'IEND') return chunks;
    chunks.push({ type, data: file.subarray(at + 8, end - 4) });
    at = end;
  }
  throw new RangeError('The PNG file has no end chunk.');
}
