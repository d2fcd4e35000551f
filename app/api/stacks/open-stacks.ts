import { stackPlace } from '@/jobs/stack-store';
import { LabError } from '@/lib/errors';
import { openStack, type StackReader } from '@/stacks/open-stack';

/** Stacks kept open for whoever scrubs through them; each costs a few file descriptors. */
const OPEN_MOST = 12;

interface Entry {
  reader: Promise<StackReader>;
  users: number;
}

const shared = globalThis as unknown as { beadlineStacks?: Map<string, Entry> };
const entries = (): Map<string, Entry> => (shared.beadlineStacks ??= new Map());

/**
 * Runs the work with the open stack of a recording.
 * @param version tells a stack that was checked anew from the old
 * @throws LabError UNAVAILABLE when it can't be opened
 */
export async function withStack<T>(
  recordingId: string,
  version: number,
  work: (stack: StackReader) => Promise<T>,
): Promise<T> {
  const key = `${recordingId}:${version}`;
  const entry = entries().get(key) ?? { reader: stackPlace(recordingId).then(openStack), users: 0 };
  // Put in again at the end: the first entry is always the one not used for longest.
  entries().delete(key);
  entries().set(key, entry);
  entry.users += 1;
  try {
    return await work(await opened(key, entry));
  } finally {
    entry.users -= 1;
    closeOldest();
  }
}

/** A stack that can't be opened is tried again by the next one who asks. */
async function opened(key: string, entry: Entry): Promise<StackReader> {
  try {
    return await entry.reader;
  } catch (cause) {
    entries().delete(key);
    throw new LabError('UNAVAILABLE', "The stored stack can't be opened: it is damaged or missing.", {
      cause,
    });
  }
}

function closeOldest(): void {
  for (const [key, entry] of entries()) {
    if (entries().size <= OPEN_MOST) return;
    if (entry.users > 0) continue;
    entries().delete(key);
    entry.reader.then((stack) => stack.close()).catch(() => undefined);
  }
}
