import { isAbsolute, join, relative, sep } from 'node:path';
import { type FrameLayout, type SampleKind } from './frame-layout';
import { type Hdf5Frames } from './hdf5/hdf5-source';

/** Facts about a stack that hold for all of its frames. */
export interface StackShape {
  width: number;
  height: number;
  /** Bits that carry information: 12 for 12-bit samples stored in 16 bits when the file says so. */
  bitDepth: number;
  sampleKind: SampleKind;
  /** Largest count a pixel can have, or Infinity for floating point samples. */
  maxCount: number;
}

/** A file of a stack: its place from the index's folder when it lies in there, else from the root. */
export interface IndexedSource {
  path: string;
  sizeBytes: number;
  /** Set when segments count in the frames of this array, not in the file's own bytes. */
  hdf5?: Hdf5Frames;
}

/**
 * Where each frame of a stack lies. Frame `k` owns record `k`: its source, its layout and a run of
 * the segment table. Frames of one archive entry that is stored compressed carry the entry's place.
 */
export interface StackIndex extends StackShape {
  frames: number;
  layouts: FrameLayout[];
  /** The files that the index was made for. */
  sources: IndexedSource[];
  /** `frames` records of `RECORD_BYTES` bytes each. */
  records: Uint8Array;
  /** `offset0, length0, offset1, length1, ...`, bytes, inside the source or the expanded entry. */
  segments: Float64Array;
}

/** A compressed archive entry that must be expanded before its segments can be read. */
export interface ArchiveEntryPlace {
  offset: number;
  storedBytes: number;
  sizeBytes: number;
  crc32: number;
}

export interface FrameRecord {
  source: number;
  layout: number;
  firstSegment: number;
  segmentCount: number;
  entry: ArchiveEntryPlace | null;
}

/** Name of the index in a stack's folder. */
export const INDEX_FILE = 'index.bin';
export const INDEX_MAGIC = 'BLIX';
export const INDEX_VERSION = 1;
/** Magic, version, bytes of the description, bytes of a record, frames, segments. */
export const INDEX_HEAD_BYTES = 32;
export const RECORD_BYTES = 48;
export const SEGMENT_BYTES = 16;

export function writeRecord(view: DataView, at: number, record: FrameRecord): void {
  view.setUint32(at, record.source, true);
  view.setUint32(at + 4, record.layout, true);
  view.setUint32(at + 8, record.segmentCount, true);
  view.setUint32(at + 12, record.entry?.crc32 ?? 0, true);
  view.setFloat64(at + 16, record.firstSegment, true);
  view.setFloat64(at + 24, record.entry?.offset ?? 0, true);
  view.setFloat64(at + 32, record.entry?.storedBytes ?? 0, true);
  view.setFloat64(at + 40, record.entry?.sizeBytes ?? 0, true);
}

export function readRecord(view: DataView, at: number): FrameRecord {
  const storedBytes = view.getFloat64(at + 32, true);
  return {
    source: view.getUint32(at, true),
    layout: view.getUint32(at + 4, true),
    segmentCount: view.getUint32(at + 8, true),
    firstSegment: view.getFloat64(at + 16, true),
    entry:
      storedBytes > 0
        ? {
            crc32: view.getUint32(at + 12, true),
            offset: view.getFloat64(at + 24, true),
            storedBytes,
            sizeBytes: view.getFloat64(at + 40, true),
          }
        : null,
  };
}

/** A path as the index keeps it. */
export function indexedPath(dir: string, path: string): string {
  const inside = relative(dir, path);
  return inside.startsWith('..') || isAbsolute(inside) ? path : inside.split(sep).join('/');
}

/** The inverse of `indexedPath`. */
export function sourcePath(dir: string, path: string): string {
  return isAbsolute(path) ? path : join(dir, path);
}
