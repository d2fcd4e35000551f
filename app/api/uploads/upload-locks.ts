import { LabError } from '@/lib/errors';
import { setTimeout as pause } from 'node:timers/promises';
import { inUploadSlot } from './upload-slots';
import { askForSessionLock, onLockEvents, releaseSessionLock, trySessionLock } from '@/models/session-locks';

/** A sender that has sent nothing for this long has probably gone without saying so, ms. */
const IDLE_MS = 10_000;
/** How long a cut-off sender may take to store what it has, ms. */
const CUT_WAIT_MS = 3_000;
/** How long another process may take to let go of an upload whose sender has fallen silent, ms. */
const ASK_WAIT_MS = 1_000;
const ASK_EVERY_MS = 100;

/** Whoever writes to an upload at the moment. */
export interface Holder {
  userId: string;
  lastByteAtMs: number;
  /** Ends the sender's request; what has arrived stays. */
  cut: () => void;
  gone: Promise<void>;
}

const shared = globalThis as unknown as { beadlineUploads?: Map<string, Holder> };
const holders = (): Map<string, Holder> => (shared.beadlineUploads ??= new Map());

const lockOf = (id: string): string => `upload:${id}`;

onLockEvents({
  // Another process may take the upload over at once: nobody here may write to it any longer.
  lost: () => holders().forEach((holder) => holder.cut()),
  wanted: (name) => {
    for (const [id, holder] of holders()) if (lockOf(id) === name && isSilent(holder)) holder.cut();
  },
});

const isSilent = ({ lastByteAtMs }: Holder): boolean => Date.now() - lastByteAtMs >= IDLE_MS;

export const isBeingSent = (id: string): boolean => holders().has(id);

/**
 * Runs the work while nobody else, in this process or another, writes to the upload. A sender that
 * has fallen silent is cut off; one that is sending is left alone.
 * @throws LabError LOCKED while another sender is at it, TOO_MANY above the person's uploads at once.
 */
export async function withUploadLock<T>(
  id: string,
  userId: string,
  work: (holder: Holder) => Promise<T>,
): Promise<T> {
  await cutIdle(id);
  let leave: () => void = () => undefined;
  const gone = new Promise<void>((resolve) => (leave = resolve));
  const holder: Holder = { userId, lastByteAtMs: Date.now(), cut: () => undefined, gone };
  if (holders().has(id)) throw beingSent();
  holders().set(id, holder);
  try {
    return await inUploadSlot(userId, async () => {
      if (!(await takeLock(lockOf(id)))) throw beingSent();
      try {
        return await work(holder);
      } finally {
        await releaseSessionLock(lockOf(id));
      }
    });
  } finally {
    holders().delete(id);
    leave();
  }
}

/** Takes the lock; a process that holds it for a sender who has fallen silent is asked to let go. */
async function takeLock(name: string): Promise<boolean> {
  if (await trySessionLock(name)) return true;
  await askForSessionLock(name);
  for (let waitedMs = 0; waitedMs < ASK_WAIT_MS; waitedMs += ASK_EVERY_MS) {
    await pause(ASK_EVERY_MS);
    if (await trySessionLock(name)) return true;
  }
  return false;
}

const beingSent = () =>
  new LabError('LOCKED', 'This upload is being sent from another page or program already.', {
    headers: { 'Retry-After': '5' },
  });

async function cutIdle(id: string): Promise<void> {
  const holder = holders().get(id);
  if (!holder) return;
  if (!isSilent(holder)) throw beingSent();
  holder.cut();
  let timer: NodeJS.Timeout | undefined;
  const late = new Promise<void>((resolve) => (timer = setTimeout(resolve, CUT_WAIT_MS)));
  await Promise.race([holder.gone, late]);
  clearTimeout(timer);
}
