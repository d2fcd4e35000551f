import { limit } from '@/lib/env';
import { LabError } from '@/lib/errors';
import { releaseSessionLock, trySessionLock } from '@/models/session-locks';

const shared = globalThis as unknown as { beadlineUploadSlots?: Set<string> };
/** Slots of people that this process holds or is asking for: to PostgreSQL all of a connection's locks are one owner's. */
const held = (): Set<string> => (shared.beadlineUploadSlots ??= new Set());

/**
 * Runs the work in one of the person's places for uploads, of which there are so many in all processes together.
 * @throws LabError TOO_MANY when all of them are taken
 */
export async function inUploadSlot<T>(userId: string, work: () => Promise<T>): Promise<T> {
  const most = limit('uploadsAtOnce');
  for (let place = 0; place < most; place++) {
    const name = `upload-slot:${userId}:${place}`;
    if (held().has(name)) continue;
    held().add(name);
    try {
      if (!(await trySessionLock(name))) continue;
      try {
        return await work();
      } finally {
        await releaseSessionLock(name);
      }
    } finally {
      held().delete(name);
    }
  }
  throw new LabError('TOO_MANY', `At most ${most} uploads at once.`, { headers: { 'Retry-After': '5' } });
}
