import { closeSync, openSync, readSync } from 'node:fs';
import type { SpotSource } from '@/tracking/spot-source';
import { freeMemory } from './free-memory';
import { emptySpots, readSpotsHeader, SPOT_COLUMNS, SPOTS_HEADER_BYTES } from '@/tracking/spots';
import type { Spots } from '@/tracking/types';

/** So many are asked for at once for a whole window of linking, whose forerunner is done with then. */
const WINDOW_SPOTS = 50_000;

interface SpotFile {
  descriptor: number;
  /** Number of its first spot in the recording. */
  first: number;
  count: number;
}

/** Spots in files, of which only those asked for are read. */
export interface SpotFiles extends SpotSource {
  close(): void;
}

/**
 * Encoded spots of runs of frames, a file each, as one source.
 *
 * @param frames of the recording.
 * @throws RangeError like `decodeSpots`, where a run begins before the one in front of it ends, and where a spot
 *   lies outside the recording.
 */
export function openSpotFiles(paths: readonly string[], frames: number): SpotFiles {
  const files: SpotFile[] = [];
  const frameStart = new Uint32Array(frames + 1);
  const close = () => files.forEach(({ descriptor }) => closeSync(descriptor));
  let count = 0;
  let lastFrame = 0;
  try {
    for (const path of paths) {
      const descriptor = openSync(path, 'r');
      const file = { descriptor, first: count, count: 0 };
      files.push(file);
      const header = new Uint8Array(SPOTS_HEADER_BYTES);
      readAll(descriptor, header, 0);
      file.count = readSpotsHeader(header);
      const frame = new Uint32Array(file.count);
      readAll(descriptor, frame, SPOTS_HEADER_BYTES);
      for (const one of frame) {
        if (one < lastFrame)
          throw new RangeError(`Spots of frame ${one} came after those of frame ${lastFrame}.`);
        if (one >= frames) {
          throw new RangeError(`A spot is in frame ${one}, but the recording has ${frames} frames.`);
        }
        frameStart[one + 1]++;
        lastFrame = one;
      }
      count += file.count;
    }
  } catch (cause) {
    close();
    throw cause;
  }
  for (let f = 0; f < frames; f++) frameStart[f + 1] += frameStart[f];
  return { count, frameStart, close, slice: (from, to, into) => readSpots(files, from, to, into) };
}

function readSpots(files: readonly SpotFile[], from: number, to: number, into?: Spots): Spots {
  if (to - from > WINDOW_SPOTS) freeMemory();
  const spots =
    into && into.frame.length >= to - from ? { ...into, count: to - from } : emptySpots(to - from);
  for (const { descriptor, first, count } of files) {
    const begin = Math.max(from, first);
    const end = Math.min(to, first + count);
    if (begin >= end) continue;
    let column = SPOTS_HEADER_BYTES;
    for (const name of SPOT_COLUMNS) {
      const width = spots[name].BYTES_PER_ELEMENT;
      const part = spots[name].subarray(begin - from, end - from);
      readAll(descriptor, part, column + width * (begin - first));
      column += width * count;
    }
  }
  return spots;
}

/** @throws RangeError when the file ends too early. */
function readAll(descriptor: number, view: ArrayBufferView, position: number): void {
  const bytes = new Uint8Array(view.buffer, view.byteOffset, view.byteLength);
  for (let done = 0; done < bytes.length;) {
    const read = readSync(descriptor, bytes, done, bytes.length - done, position + done);
    if (read === 0) throw new RangeError('The file of spots ends too early.');
    done += read;
  }
}
