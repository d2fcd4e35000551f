import { type ByteSource, fileSource } from './byte-source';
import { collectHdf5 } from './hdf5/collect-hdf5';
import { collectNpy } from './npy/collect-npy';
import { collectPng } from './png/collect-png';
import { StackRefusal } from './refusal';
import { extensionOf, firstBytes, nameContradicts, shownBytes, sniffBytes, type FileFormat } from './sniff';
import { type PagePlace, type StackCollector } from './stack-collector';
import { indexedPath } from './stack-index';
import { type InspectOptions, type StackSource } from './stack-report';
import { collectTiff } from './tiff/collect-tiff';
import { collectZip } from './zip/collect-zip';

type OneFile = Extract<StackSource, { kind: 'file' }>;

/** Frames of a packed archive are read one by one, so its size is bounded by patience, not by memory. */
const EXPANDED_BYTES_MAX = 200e9;

/** The file's format by its content. @throws StackRefusal unless it is one that is known and its name agrees. */
async function formatOf(bytes: ByteSource, name: string): Promise<FileFormat> {
  if (bytes.sizeBytes === 0) throw new StackRefusal('EMPTY_FILE', 'The file is empty (0 bytes).');
  const first = await firstBytes(bytes);
  const format = sniffBytes(first);
  if (format === null) {
    throw new StackRefusal(
      'UNKNOWN_FORMAT',
      `This is not a TIFF, PNG, ZIP, NPY or HDF5 file (first bytes: ${shownBytes(first)}).`,
    );
  }
  if (nameContradicts(name, format)) {
    throw new StackRefusal('TYPE_MISMATCH', `Named .${extensionOf(name)} but contains ${format} data.`);
  }
  return format;
}

/**
 * Adds the pages of one file, whatever its format, to the stack.
 * @throws StackRefusal with the sentence for the first thing that is wrong.
 */
export async function collectFile(
  { path, name }: OneFile,
  outDir: string,
  collector: StackCollector,
  options: Pick<InspectOptions, 'expandedBytesMax' | 'signal'>,
): Promise<void> {
  const bytes = await fileSource(path);
  const format = await formatOf(bytes, name);
  collector.sources.push({ path: indexedPath(outDir, path), sizeBytes: bytes.sizeBytes });
  const place: PagePlace = { source: 0, entry: null, fileName: null };
  switch (format) {
    case 'TIFF':
      return collectTiff(bytes, collector, place);
    case 'PNG':
      return collectPng(bytes, collector, { ...place, fileName: name }, name);
    case 'NPY':
      return collectNpy(bytes, collector, place);
    case 'ZIP': {
      const { expandedBytesMax = EXPANDED_BYTES_MAX, signal } = options;
      return collectZip(bytes, path, collector, { expandedBytesMax, signal });
    }
    case 'HDF5':
      return collectHdf5(path, collector, place);
  }
}
