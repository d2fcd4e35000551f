import { type ByteSource, lazyFileSource } from './byte-source';
import { hdf5Source } from './hdf5/hdf5-source';
import { type IndexedSource, sourcePath } from './stack-index';

/** The bytes that an index's segments count in: those of a file, or of the array of frames in it. */
export function openSource(dir: string, { path, sizeBytes, hdf5 }: IndexedSource): ByteSource {
  const place = sourcePath(dir, path);
  return hdf5 ? hdf5Source(place, sizeBytes, hdf5) : lazyFileSource(place, sizeBytes);
}
