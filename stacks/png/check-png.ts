import { crc32 } from '../crc32';

const IEND = 0x49454e44;

/**
 * Walks the chunks of a PNG file and checks each checksum, so that no damaged frame is read as if
 * it were sound.
 * @throws RangeError when a chunk is cut, its checksum differs, or the end chunk is missing.
 */
export function checkPngChunks(file: Uint8Array): void {
  const view = new DataView(file.buffer, file.byteOffset, file.byteLength);
  let at = 8;
  while (at + 12 <= file.byteLength) {
    const length = view.getUint32(at);
    const end = at + 12 + length;
    if (end > file.byteLength) throw new RangeError('A PNG chunk is cut.');
    if (crc32(file.subarray(at + 4, end - 4)) !== view.getUint32(end - 4)) {
      throw new RangeError('The checksum of a PNG chunk differs.');
    }
    if (view.getUint32(at + 4) === IEND) return;
    at = end;
  }
  throw new RangeError('The PNG file has no end chunk.');
}
