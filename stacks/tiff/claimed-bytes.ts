import { type Segments } from '../segments';
import { TYPE_BYTES } from './tiff-tags';
import { type TiffDirectory } from './tiff-file';

/** What a page occupies of its file. */
export interface Claim {
  bytes: number;
  /** First byte after everything the page claims. */
  end: number;
}

/** Bytes of the directory, of values outside it, and of the page's data (null when that is cut). */
export function claimOf(directory: TiffDirectory, segments: Segments | null, sizeBytes: number): Claim {
  let bytes = directory.end - directory.offset;
  let end = directory.end;
  const add = (at: number, length: number) => {
    if (at + length > sizeBytes) return;
    bytes += length;
    end = Math.max(end, at + length);
  };
  for (const { type, count, at } of directory.fields.values()) {
    const length = count * TYPE_BYTES[type]!;
    if (length > 8 || at < directory.offset || at >= directory.end) add(at, length);
  }
  segments?.offsets.forEach((offset, i) => add(offset, segments.lengths[i]!));
  return { bytes, end };
}
