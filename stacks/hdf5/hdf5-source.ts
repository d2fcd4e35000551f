import { type ByteSource, assertInside } from '../byte-source';
import { Hdf5File } from './hdf5-file';

/** The array of an HDF5 file that holds the frames, as the index remembers it. */
export interface Hdf5Frames {
  /** Path of the array inside the file. */
  array: string;
  frames: number;
  rows: number;
  columns: number;
  frameBytes: number;
  /** Frames that are unpacked together, because their file stores them so. */
  together: number;
}

/**
 * Frame after frame of an array, as if they lay uncompressed in a file. Only whole frames are read.
 * @param fileBytes size of the file when it was indexed; a file that has another size now is refused
 */
export function hdf5Source(path: string, fileBytes: number, frames: Hdf5Frames): ByteSource {
  const { array, rows, columns, frameBytes, together } = frames;
  let file: Promise<Hdf5File> | null = null;
  let kept: { first: number; bytes: Uint8Array } | null = null;
  const opened = async () => {
    const now = await Hdf5File.open(path);
    if (now.sizeBytes === fileBytes) return now;
    now.close();
    throw new RangeError(`The file had ${fileBytes} bytes, now it has ${now.sizeBytes}.`);
  };
  const source = {
    sizeBytes: frames.frames * frameBytes,
    async read(offset: number, length: number) {
      assertInside(source, offset, length);
      const frame = offset / frameBytes;
      if (!Number.isInteger(frame) || length !== frameBytes) {
        throw new RangeError(
          `Frames of ${frameBytes} bytes are read whole. Asked for ${length} from ${offset}.`,
        );
      }
      const open = await (file ??= opened());
      const first = frame - (frame % together);
      if (kept?.first !== first) {
        kept = null;
        const count = Math.min(together, frames.frames - first);
        kept = { first, bytes: open.readFrames(array, first, count, [rows, columns], frameBytes) };
      }
      // A copy, so that its views are aligned and the reader may change it.
      return kept.bytes.slice((frame - first) * frameBytes, (frame - first + 1) * frameBytes);
    },
    async close() {
      const open = await file?.catch(() => null);
      file = null;
      kept = null;
      open?.close();
    },
  };
  return source;
}
