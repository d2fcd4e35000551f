import { open, readFile, type FileHandle } from 'node:fs/promises';
import type { Tracks } from '@/tracking/types';

/** Tracks as a computation takes them: themselves, or where they lie on this machine's disk. */
export type TracksAt = Tracks | { path: string };

/** "BDTR" read as a little-endian number. */
const MAGIC = 0x52544442;
const VERSION = 1;
export const HEADER_BYTES = 16;
/** Columns of points behind the starts of tracks, in this order; flags come last. */
export const POINT_COLUMNS = ['frame', 'xPx', 'yPx', 'sxPx', 'syPx', 'brightness', 'flags'] as const;

const bytesOf = (view: ArrayBufferView): Uint8Array =>
  new Uint8Array(view.buffer, view.byteOffset, view.byteLength);

/**
 * Writes tracks piece by piece, in their order, so that they need not all be held at once.
 * The file: magic, version, tracks, points (32-bit numbers, little-endian as all), starts of tracks, then the columns
 * of points one behind the other.
 */
export class TrackFileWriter {
  private tracks = 0;
  private points = 0;

  private constructor(
    private readonly file: FileHandle,
    private readonly size: { tracks: number; points: number },
  ) {}

  static async create(path: string, size: { tracks: number; points: number }): Promise<TrackFileWriter> {
    const file = await open(path, 'w');
    await file.write(Uint32Array.of(MAGIC, VERSION, size.tracks, size.points), 0, HEADER_BYTES, 0);
    return new TrackFileWriter(file, size);
  }

  /** @param piece the tracks that follow those written so far. */
  async append(piece: Tracks): Promise<void> {
    const start = piece.start.subarray(0, piece.count + 1).map((at) => at + this.points);
    await this.put(start, HEADER_BYTES + 4 * this.tracks);
    let column = HEADER_BYTES + 4 * (this.size.tracks + 1);
    for (const name of POINT_COLUMNS) {
      const values = piece[name];
      const width = values.BYTES_PER_ELEMENT;
      await this.put(values, column + width * this.points);
      column += width * this.size.points;
    }
    this.tracks += piece.count;
    this.points += piece.frame.length;
  }

  /** @throws RangeError when other tracks were written than were said to come. */
  async close(): Promise<void> {
    if (this.tracks === 0) await this.put(Uint32Array.of(0), HEADER_BYTES);
    await this.file.close();
    const { tracks, points } = this.size;
    if (this.tracks !== tracks || this.points !== points) {
      throw new RangeError(
        `Got ${this.tracks} tracks of ${this.points} points when expected ${tracks} of ${points}.`,
      );
    }
  }

  /** Ends the writing of a file that nobody will read. */
  async abandon(): Promise<void> {
    await this.file.close().catch(() => undefined);
  }

  private async put(view: ArrayBufferView, at: number): Promise<void> {
    const bytes = bytesOf(view);
    for (let done = 0; done < bytes.length;) {
      const { bytesWritten } = await this.file.write(bytes, done, bytes.length - done, at + done);
      done += bytesWritten;
    }
  }
}

export async function writeTrackFile(path: string, tracks: Tracks): Promise<void> {
  const writer = await TrackFileWriter.create(path, { tracks: tracks.count, points: tracks.frame.length });
  if (tracks.count > 0) await writer.append(tracks);
  await writer.close();
}

/** How many tracks and points a file has, from the numbers that it begins with. @throws RangeError */
export function readHeader([magic, version, count, points]: Uint32Array): { count: number; points: number } {
  if (magic !== MAGIC) throw new RangeError('These bytes are not tracks.');
  if (version !== VERSION) throw new RangeError(`Got tracks v${version} when expected v${VERSION}.`);
  return { count, points };
}

/** All tracks of a file, as views of its bytes. @throws RangeError when it is not a whole file of this version. */
export async function readTrackFile(path: string): Promise<Tracks> {
  const bytes = await readFile(path);
  // Views of 32 bits need an address that 4 divides: large files have one, small ones are copied.
  const { buffer, byteOffset, length } = bytes.byteOffset % 4 === 0 ? bytes : Buffer.from(new Uint8Array(bytes).buffer); // prettier-ignore
  const { count, points } = readHeader(new Uint32Array(buffer, byteOffset, length >= HEADER_BYTES ? 4 : 0));
  const expected = HEADER_BYTES + 4 * (count + 1) + 25 * points;
  if (length !== expected) throw new RangeError(`Got ${length} bytes when the tracks have ${expected}.`);
  let at = byteOffset + HEADER_BYTES;
  const start = new Uint32Array(buffer, at, count + 1);
  const frame = new Uint32Array(buffer, (at += 4 * (count + 1)), points);
  const floats = [1, 2, 3, 4, 5].map(() => new Float32Array(buffer, (at += 4 * points), points));
  const [xPx, yPx, sxPx, syPx, brightness] = floats;
  const flags = new Uint8Array(buffer, at + 4 * points, points);
  return { count, start, frame, xPx, yPx, sxPx, syPx, brightness, flags };
}

let last: { path: string; tracks: Tracks } | null = null;

/** Tracks wherever they lie; those of the file read last are held, since stages look at the same ones. */
export async function tracksAt(at: TracksAt): Promise<Tracks> {
  if (!('path' in at)) return at;
  if (last?.path !== at.path) {
    last = null;
    last = { path: at.path, tracks: await readTrackFile(at.path) };
  }
  return last.tracks;
}
