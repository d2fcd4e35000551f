import { assertFrameSize } from '../check-size';
import { plainLayout, type SampleKind } from '../frame-layout';
import { STACK_LIMITS } from '../limits';
import { StackRefusal } from '../refusal';
import { grouped, megabytes, shownName } from '../sentence';
import { type PagePlace, type StackCollector, tooManyPages } from '../stack-collector';
import { type FoundArray, findFrames } from './find-frames';
import { Hdf5Error, Hdf5File } from './hdf5-file';
import { type Hdf5Type } from './hdf5-module';
import { type Hdf5Frames } from './hdf5-source';

/** The library unpacks a chunk as a whole, bytes. */
const CHUNK_BYTES_MAX = 256e6;
/** Frames of a chunk that are kept together after it was unpacked, bytes. */
const KEPT_BYTES_MAX = 64e6;
/** No compression makes more of a byte than this; what goes beyond was announced but never written. */
const EXPANSION_MAX = 1100;
const EXPANSION_FROM_BYTES = 100e6;
/** Filters that come with the library; numbers are those registered with the HDF Group. */
const FILTERS = new Map([[1, 'gzip'], [2, 'shuffle'], [3, 'Fletcher32'], [4, 'szip'], [5, 'N-bit'], [6, 'scale-offset']]); // prettier-ignore
const KINDS: Record<string, { bits: number; sampleKind: SampleKind }> = {
  uint8: { bits: 8, sampleKind: 'uint' },
  int8: { bits: 8, sampleKind: 'int' },
  uint16: { bits: 16, sampleKind: 'uint' },
  int16: { bits: 16, sampleKind: 'int' },
  float32: { bits: 32, sampleKind: 'float' },
};

/**
 * Adds the frames of an HDF5 file's one array of (frames, rows, columns) to the stack.
 * @throws StackRefusal HDF5_DAMAGED, HDF5_ARRAY when there is no such array or more than one, HDF5_DTYPE,
 *   COMPRESSION, and those of any stack for sizes out of bounds
 */
export async function collectHdf5(path: string, collector: StackCollector, place: PagePlace): Promise<void> {
  const file = await opened(path);
  try {
    const array = findFrames(file);
    const { frames, page } = describe(file, array);
    // The index takes the array for a source of its own: frame after frame, as they would lie in a file.
    Object.assign(collector.sources[place.source]!, { hdf5: frames });
    const wanted = Math.min(frames.frames, collector.pagesMax);
    for (let k = 0; k < wanted; k++) {
      const segments = {
        offsets: Float64Array.of(k * frames.frameBytes),
        lengths: Float64Array.of(frames.frameBytes),
      };
      collector.add({ ...page, segments }, place);
    }
  } catch (cause) {
    throw cause instanceof Hdf5Error ? damaged(cause) : cause;
  } finally {
    file.close();
  }
}

async function opened(path: string): Promise<Hdf5File> {
  try {
    return await Hdf5File.open(path);
  } catch (cause) {
    throw cause instanceof Hdf5Error ? damaged(cause) : cause;
  }
}

function damaged(cause: Hdf5Error): StackRefusal {
  const [, held, needed] = /truncated file: eof = (\d+).*stored_eof = (\d+)/.exec(cause.message) ?? [];
  const detail = needed
    ? `The file ends too early: it announces ${grouped(Number(needed))} bytes and has ${grouped(Number(held))}.`
    : 'The HDF5 file is damaged: its structure can not be read.';
  return new StackRefusal('HDF5_DAMAGED', detail, {}, { cause });
}

function describe(file: Hdf5File, { path, type }: FoundArray) {
  const [count, height, width] = type.shape as [number, number, number];
  if (type.virtual_sources?.length) {
    throw new StackRefusal(
      'HDF5_ARRAY',
      `Array '${shownName(path)}' is put together from other files. Save its frames in one file.`,
    );
  }
  const kind = KINDS[dtypeOf(type)];
  if (!kind) throw new StackRefusal('HDF5_DTYPE', `dtype ${dtypeOf(type)} is not accepted.`);
  if (count === 0) throw new StackRefusal('NO_PAGES', 'The file has no image pages.');
  assertFrameSize(width, height, 1);
  if (count > STACK_LIMITS.pages) throw tooManyPages();
  assertFilters(file, path);
  const frameBytes = (width * height * kind.bits) / 8;
  const together = framesTogether(type, frameBytes);
  assertWritten(count * frameBytes, file.sizeBytes);
  const frames: Hdf5Frames = {
    array: path,
    ...{ frames: count, rows: height, columns: width, frameBytes },
    together,
  };
  const facts = { width, height, ...kind, channels: 1 };
  // The library turns samples into those of the machine it runs on, which is little-endian.
  return { frames, page: { facts, layout: plainLayout(width, height, { ...kind, littleEndian: true }) } };
}

function dtypeOf({ type, size, signed }: Hdf5Type): string {
  return type === 1 ? `float${size * 8}` : `${signed ? '' : 'u'}int${size * 8}`;
}

function assertFilters(file: Hdf5File, path: string): void {
  for (const { id, name } of file.filtersOf(path)) {
    if (FILTERS.has(id)) continue;
    const named = name ? ` (${shownName(name)})` : '';
    throw new StackRefusal(
      'COMPRESSION',
      `Compression filter ${id}${named} is not supported. Save uncompressed or with gzip.`,
    );
  }
}

/** How many frames are unpacked at once anyway. @throws StackRefusal when that is more than memory should take */
function framesTogether({ chunks, size }: Hdf5Type, frameBytes: number): number {
  if (!chunks) return 1;
  const chunkBytes = chunks.reduce((product, side) => product * side, size);
  if (chunkBytes > CHUNK_BYTES_MAX) {
    throw new StackRefusal(
      'HDF5_CHUNKS',
      `The array is stored in chunks of ${megabytes(chunkBytes)}; the limit is ${megabytes(CHUNK_BYTES_MAX)}. Save it in smaller chunks.`,
    );
  }
  return Math.max(1, Math.min(chunks[0]!, Math.floor(KEPT_BYTES_MAX / frameBytes)));
}

function assertWritten(bytes: number, held: number): void {
  if (bytes <= EXPANSION_FROM_BYTES || bytes <= EXPANSION_MAX * held) return;
  throw new StackRefusal(
    'HDF5_ARRAY',
    `The array announces ${megabytes(bytes)}, but the file has only ${megabytes(held)}: most frames were never written.`,
  );
}
