import { type ByteSource, OutOfRangeError } from '../byte-source';
import { readOme } from '../ome';
import { type FoundPage, type PagePlace, type StackCollector } from '../stack-collector';
import { followingFrames, statedFrames } from './contiguous-frames';
import { truncatedStack } from './judge-end';
import { readDescription } from './read-description';
import { TiffFile } from './tiff-file';
import { walkTiff } from './walk-tiff';

async function openTiff(source: ByteSource): Promise<TiffFile> {
  try {
    return await TiffFile.open(source);
  } catch (cause) {
    if (cause instanceof OutOfRangeError) throw truncatedStack(0, 1);
    throw cause;
  }
}

/** 12 for a largest sample of 4095; null when the number is not that of a whole bit depth. */
function bitsOfLargest(largest: number | null): number | null {
  const bits = Math.log2((largest ?? 0) + 1);
  return Number.isInteger(bits) ? bits : null;
}

/**
 * Adds the pages of one TIFF file to the stack.
 * @throws StackRefusal with the sentence for the first thing that is wrong.
 */
export async function collectTiff(
  source: ByteSource,
  collector: StackCollector,
  place: PagePlace,
): Promise<void> {
  const file = await openTiff(source);
  const isFirstFile = collector.pages === 0;
  let frames = 1;
  let listed: FoundPage[] = [];
  const take = (found: FoundPage) => {
    collector.add(found, place);
    return !collector.isFull;
  };
  await walkTiff(file, {
    channel: collector.channel,
    async first(directory, page) {
      const description = await readDescription(file, directory);
      frames = statedFrames(description);
      if (!isFirstFile) return;
      const ome = readOme(description, page.layout.samplesPerPixel * page.storedPlanes);
      collector.metadata = ome.metadata;
      collector.warnings.push(...ome.warnings);
      collector.significantBits = ome.significantBits ?? bitsOfLargest(page.maxSampleValue);
    },
    page(found) {
      if (listed.length < 2) listed = [...listed, found];
      return take(found);
    },
  });
  if (listed.length === 1 && !collector.isFull) followingFrames(listed[0]!, frames, source.sizeBytes, take);
}
