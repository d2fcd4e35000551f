import { join } from 'node:path';
import { type ByteSource, fileSource, lazyFileSource } from './byte-source';
import { hdf5Source } from './hdf5/hdf5-source';
import { objectSize, objectSource } from './s3/object-source';
import { fetchedHdf5Source } from './s3/fetched-hdf5-source';
import { INDEX_FILE, type IndexedSource, sourcePath } from './stack-index';
import { type StackPlace, urlOf } from './stack-place';

/** The bytes that an index's segments count in: those of a file, or of the array of frames in it. */
export function openSource(place: StackPlace, { path, sizeBytes, hdf5 }: IndexedSource): ByteSource {
  if (typeof place !== 'string') {
    const url = urlOf(place, path);
    return hdf5 ? fetchedHdf5Source(url, sizeBytes, hdf5) : objectSource(url, sizeBytes);
  }
  const file = sourcePath(place, path);
  return hdf5 ? hdf5Source(file, sizeBytes, hdf5) : lazyFileSource(file, sizeBytes);
}

/** The bytes of a stack's index. */
export async function openIndexSource(place: StackPlace): Promise<ByteSource> {
  if (typeof place === 'string') return fileSource(join(place, INDEX_FILE));
  const url = urlOf(place, INDEX_FILE);
  return objectSource(url, await objectSize(url));
}
