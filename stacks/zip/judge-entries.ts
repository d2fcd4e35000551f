import { STACK_LIMITS } from '../limits';
import { StackRefusal } from '../refusal';
import { grouped, megabytes, shownName } from '../sentence';
import { extensionOf } from '../sniff';
import { encrypted, type ZipEntry } from './list-entries';

const content = (detail: string) => new StackRefusal('ZIP_CONTENT', detail);

function assertPlace(name: string): void {
  const outside = /^[/\\]|^[a-zA-Z]:|\\|(^|\/)\.\.(\/|$)/.test(name);
  if (outside) throw new StackRefusal('ZIP_PATH', `Entry '${shownName(name)}' points outside the archive.`);
}

function assertSizes({ name, method, storedBytes, sizeBytes }: ZipEntry): void {
  const shown = shownName(name);
  const ratio = sizeBytes / Math.max(1, storedBytes);
  if (method === 8 && sizeBytes > STACK_LIMITS.zipRatioFromBytes && ratio > STACK_LIMITS.zipRatio) {
    const fold = grouped(Math.round(ratio)).replaceAll(',', '');
    throw new StackRefusal('ZIP_BOMB', `Entry '${shown}' expands ${fold}-fold. Archive refused.`);
  }
  if (method === 0 && storedBytes !== sizeBytes) {
    const word = storedBytes > sizeBytes ? 'larger' : 'smaller';
    throw new StackRefusal('ZIP_SIZE', `Entry '${shown}' is ${word} than declared.`);
  }
}

/** How names are compared: a folder on some systems can't hold two that are equal in this form. */
const sameForm = (name: string) => name.normalize('NFC').toLowerCase();

function assertUnique(entries: readonly ZipEntry[]): void {
  const seen = new Map<string, string>();
  for (const { name } of entries) {
    const before = seen.get(sameForm(name));
    if (before === name) throw content(`Entry '${shownName(name)}' appears twice.`);
    if (before !== undefined) {
      throw content(`Entries '${shownName(before)}' and '${shownName(name)}' differ only in capitals.`);
    }
    seen.set(sameForm(name), name);
  }
}

function assertReadable({ name, method }: ZipEntry): void {
  if (extensionOf(name) === 'zip') {
    throw content(`Entry '${shownName(name)}' is itself an archive. Upload the frames in one archive.`);
  }
  if (method !== 0 && method !== 8) {
    throw content(`Entry '${shownName(name)}' is packed by method ${method}. Pack it by Deflate or Store.`);
  }
}

/**
 * Judges all entries of an archive by its directory alone, before any is expanded.
 * @param expandedBytesMax bytes that all entries may have together
 * @throws StackRefusal with the sentence for the first thing that is wrong.
 */
export function judgeZipEntries(entries: readonly ZipEntry[], expandedBytesMax: number): void {
  if (entries.some((entry) => entry.encrypted)) throw encrypted();
  let expandedBytes = 0;
  for (const entry of entries) {
    assertPlace(entry.name);
    if (entry.isLink) {
      throw new StackRefusal(
        'ZIP_LINK',
        `Entry '${shownName(entry.name)}' is a link. Links are not accepted.`,
      );
    }
    assertReadable(entry);
    assertSizes(entry);
    expandedBytes += entry.sizeBytes;
  }
  if (expandedBytes > expandedBytesMax) {
    throw new StackRefusal(
      'ZIP_BOMB',
      `The archive expands to ${megabytes(expandedBytes)}; the limit is ${megabytes(expandedBytesMax)}. Archive refused.`,
    );
  }
  assertUnique(entries);
}
