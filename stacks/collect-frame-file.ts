import { type ByteSource } from './byte-source';
import { collectPng } from './png/collect-png';
import { StackRefusal } from './refusal';
import { shownName } from './sentence';
import { firstBytes, nameContradicts, shownBytes, sniffBytes } from './sniff';
import { type PagePlace, type StackCollector } from './stack-collector';
import { collectTiff } from './tiff/collect-tiff';

/** Refusals whose sentence names the file already. */
const NAMED = new Set(['PNG_CORRUPT', 'MIXED_SIZE', 'MIXED_DEPTH', 'TOO_MANY_PAGES']);
/** Refusals of a damaged file, before which the stack is intact. */
const DAMAGE = new Set(['STACK_TRUNCATED', 'PNG_CORRUPT', 'EMPTY_FILE', 'TIFF_BAD_OFFSET']);

async function collect(
  bytes: ByteSource,
  collector: StackCollector,
  place: PagePlace,
  name: string,
): Promise<void> {
  if (bytes.sizeBytes === 0) throw new StackRefusal('EMPTY_FILE', 'The file is empty (0 bytes).');
  const first = await firstBytes(bytes);
  const format = sniffBytes(first);
  if (format === null) {
    throw new StackRefusal(
      'UNKNOWN_FORMAT',
      `This is not a TIFF or PNG file (first bytes: ${shownBytes(first)}).`,
    );
  }
  if (nameContradicts(name, format)) {
    const ending = name.slice(name.lastIndexOf('.'));
    throw new StackRefusal('TYPE_MISMATCH', `Named ${ending} but contains ${format} data.`);
  }
  if (format === 'PNG') await collectPng(bytes, collector, place, name);
  else await collectTiff(bytes, collector, place);
}

/**
 * Adds one file of a folder or archive to the stack.
 * @throws StackRefusal that names the file, and offers the frames before it when the file is damaged.
 */
export async function collectFrameFile(
  bytes: ByteSource,
  collector: StackCollector,
  place: PagePlace & { fileName: string },
): Promise<void> {
  const before = collector.pages;
  try {
    await collect(bytes, collector, place, place.fileName);
  } catch (cause) {
    if (!(cause instanceof StackRefusal)) throw cause;
    const { code, detail, offer } = cause;
    const sentence = NAMED.has(code) ? detail : `${shownName(place.fileName)}: ${detail}`;
    const intact = before + (offer.usePages ?? 0);
    const usePages = DAMAGE.has(code) && intact > 0 ? { usePages: intact } : {};
    throw new StackRefusal(code, sentence, { ...offer, ...usePages }, { cause });
  }
}
