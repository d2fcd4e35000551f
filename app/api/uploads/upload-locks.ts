import { limit } from '@/lib/env';
import { LabError } from '@/lib/errors';
import { releaseSessionLock, trySessionLock } from '@/models/session-locks';

/** A sender that has sent nothing for this long has probably gone without saying so, ms. */
const IDLE_MS = 10_000;
/** How long a cut-off sender may take to store what it has, ms. */
const CUT_WAIT_MS = 3_000;

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
  const most = limit('uploadsAtOnce');
  const sending = [...holders().values()].filter((other) => other.userId === userId).length;
  if (sending >= most) {
    throw new LabError('TOO_MANY', `At most ${most} uploads at once.`, { headers: { 'Retry-After': '5' } });
  }
  let leave: () => void = () => undefined;
  const gone = new Promise<void>((resolve) => (leave = resolve));
  const holder: Holder = { userId, lastByteAtMs: Date.now(), cut: () => undefined, gone };
  if (holders().has(id)) throw beingSent();
  holders().set(id, holder);
  try {
    if (!(await trySessionLock(`upload:${id}`))) throw beingSent();
    try {
      return await work(holder);
    } finally {
      await releaseSessionLock(`upload:${id}`);
    }
  } finally {
    holders().delete(id);
    leave();
  }
}

const beingSent = () =>
  new LabError('LOCKED', 'This upload is being sent from another page or program already.', {
    headers: { 'Retry-After': '5' },
  });

async function cutIdle(id: string): Promise<void> {
  const holder = holders().get(id);
  if (!holder) return;
  if (Date.now() - holder.lastByteAtMs < IDLE_MS) throw beingSent();
  holder.cut();
  let timer: NodeJS.Timeout | undefined;
  const late = new Promise<void>((resolve) => (timer = setTimeout(resolve, CUT_WAIT_MS)));
  await Promise.race([holder.gone, late]);
  clearTimeout(timer);
}
