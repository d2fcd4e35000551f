import type { RehearsalDraft } from '@/lib/schemas/rehearsal';
import type { Transaction } from 'sequelize';
import { execute, selectRow } from './select';

/** What a person has typed of a rehearsal and not sent; null for nothing. */
export async function readDraft(
  labId: string,
  userId: string,
): Promise<{ form: RehearsalDraft; updatedAt: string } | null> {
  // prettier-ignore
  const row = await selectRow<{ form: RehearsalDraft; updated_at: Date }>(
    'SELECT form, updated_at FROM rehearsal_drafts WHERE lab_id = $1 AND user_id = $2',
    [labId, userId],
  );
  return row && { form: row.form, updatedAt: row.updated_at.toISOString() };
}

export function saveDraft(labId: string, userId: string, form: RehearsalDraft): Promise<void> {
  return execute(
    `INSERT INTO rehearsal_drafts (lab_id, user_id, form) VALUES ($1, $2, $3)
     ON CONFLICT (lab_id, user_id) DO UPDATE SET form = excluded.form, updated_at = now()`,
    [labId, userId, JSON.stringify(form)],
  );
}

export function dropDraft(labId: string, userId: string, transaction?: Transaction): Promise<void> {
  return execute('DELETE FROM rehearsal_drafts WHERE lab_id = $1 AND user_id = $2', [labId, userId], transaction); // prettier-ignore
}
