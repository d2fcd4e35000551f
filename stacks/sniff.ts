import { type ByteSource } from './byte-source';

export type FileFormat = 'TIFF' | 'PNG' | 'ZIP' | 'NPY' | 'HDF5';

const MAGIC: readonly [FileFormat, readonly number[]][] = [
  ['TIFF', [0x49, 0x49, 42, 0]],
  ['TIFF', [0x4d, 0x4d, 0, 42]],
  ['TIFF', [0x49, 0x49, 43, 0]],
  ['TIFF', [0x4d, 0x4d, 0, 43]],
  ['PNG', [0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]],
  ['ZIP', [0x50, 0x4b, 3, 4]],
  ['ZIP', [0x50, 0x4b, 5, 6]],
  ['NPY', [0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59]],
  ['HDF5', [0x89, 0x48, 0x44, 0x46, 0x0d, 0x0a, 0x1a, 0x0a]],
];

/** Name endings that promise a content. Other endings promise nothing. */
const PROMISED: Record<string, FileFormat | 'other'> = {
  tif: 'TIFF',
  tiff: 'TIFF',
  btf: 'TIFF',
  tf8: 'TIFF',
  png: 'PNG',
  zip: 'ZIP',
  npy: 'NPY',
  npz: 'ZIP',
  h5: 'HDF5',
  hdf5: 'HDF5',
  nxs: 'HDF5',
  jpg: 'other',
  jpeg: 'other',
  gif: 'other',
  bmp: 'other',
  pdf: 'other',
  avi: 'other',
  mp4: 'other',
};

/** The format that the first bytes show, or null. 8 bytes are enough. */
export function sniffBytes(first: Uint8Array): FileFormat | null {
  const hit = MAGIC.find(([, magic]) => magic.every((byte, i) => first[i] === byte));
  return hit ? hit[0] : null;
}

/** The first bytes of a source, at most `length`. */
export async function firstBytes(source: ByteSource, length = 8): Promise<Uint8Array> {
  return source.read(0, Math.min(length, source.sizeBytes));
}

/** The name's ending without the dot, in small letters, or ''. */
export function extensionOf(name: string): string {
  const base = name.slice(name.lastIndexOf('/') + 1);
  const dot = base.lastIndexOf('.');
  return dot < 0 ? '' : base.slice(dot + 1).toLowerCase();
}

/** Whether the name's ending promises another content than `format`. */
export function nameContradicts(name: string, format: FileFormat): boolean {
  const promised = PROMISED[extensionOf(name)];
  return promised !== undefined && promised !== format;
}

/** Whether the name says that this is a frame (so that content of another kind is a fault, not an extra). */
export function namedAsFrame(name: string): boolean {
  const promised = PROMISED[extensionOf(name)];
  return promised === 'TIFF' || promised === 'PNG';
}

/** The first four bytes as `25 50 44 46`. */
export function shownBytes(first: Uint8Array): string {
  return Array.from(first.subarray(0, 4), (byte) => byte.toString(16).toUpperCase().padStart(2, '0')).join(
    ' ',
  );
}
