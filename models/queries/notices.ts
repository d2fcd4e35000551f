import type { NoticeKind } from '@/lib/mail/mail-kinds';
import { execute, selectRow } from './select';

/** Notices that a member does not want from this laboratory. */
export async function noticesOff(labId: string, userId: string): Promise<NoticeKind[]> {
  const row = await selectRow<{ off: NoticeKind[] }>(
    'SELECT notices_off AS off FROM memberships WHERE lab_id = $1 AND user_id = $2',
    [labId, userId],
  );
  return row?.off ?? [];
}

export const setNoticesOff = (labId: string, userId: string, off: readonly NoticeKind[]): Promise<void> =>
  execute(
    'UPDATE memberships SET notices_off = $3::text[], updated_at = now() WHERE lab_id = $1 AND user_id = $2',
    [labId, userId, [...new Set(off)]],
  );
