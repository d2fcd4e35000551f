import { open, type FileHandle } from 'node:fs/promises';
import { trackSlice, type TrackSlice } from '@/tracking/track-slice';
import type { Tracks } from '@/tracking/types';
import { HEADER_BYTES, POINT_COLUMNS, readHeader } from './track-file';

/** Points that are read at once: about a megabyte. */
const PIECE_POINTS = 50_000;

/**
 * The tracks of a file one by one; only a piece of them is ever in memory.
 *
 * @throws RangeError when it is not a file of tracks of this version, or ends too early
 */
export async function* readTrackSlices(path: string): AsyncGenerator<TrackSlice> {
  const file = await open(path);
  try {
    const header = await read(file, new Uint32Array(HEADER_BYTES / 4), 0);
    const { count, points } = readHeader(header);
    const start = await read(file, new Uint32Array(count + 1), HEADER_BYTES);
    for (let from = 0; from < count;) {
      let to = from + 1;
      while (to < count && start[to + 1] - start[from] <= PIECE_POINTS) to++;
      const piece = await readPiece(file, { start, points }, from, to);
      for (let i = 0; i < piece.count; i++) yield { ...trackSlice(piece, i), track: from + i };
      from = to;
    }
  } finally {
    await file.close();
  }
}

async function readPiece(
  file: FileHandle,
  { start, points }: { start: Uint32Array; points: number },
  from: number,
  to: number,
): Promise<Tracks> {
  const many = start[to] - start[from];
  const piece: Tracks = {
    count: to - from,
    start: start.subarray(from, to + 1).map((at) => at - start[from]),
    frame: new Uint32Array(many),
    xPx: new Float32Array(many),
    yPx: new Float32Array(many),
    sxPx: new Float32Array(many),
    syPx: new Float32Array(many),
    brightness: new Float32Array(many),
    flags: new Uint8Array(many),
  };
  let column = HEADER_BYTES + start.byteLength;
  for (const name of POINT_COLUMNS) {
    const width = piece[name].BYTES_PER_ELEMENT;
    await read(file, piece[name], column + width * start[from]);
    column += width * points;
  }
  return piece;
}

/** Fills the array from a place in the file on. */
async function read<T extends ArrayBufferView>(file: FileHandle, into: T, position: number): Promise<T> {
  const bytes = new Uint8Array(into.buffer, into.byteOffset, into.byteLength);
  for (let done = 0; done < bytes.length;) {
    const { bytesRead } = await file.read(bytes, done, bytes.length - done, position + done);
    if (bytesRead === 0) throw new RangeError('The file of tracks ends too early.');
    done += bytesRead;
  }
  return into;
}
