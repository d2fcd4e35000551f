import { execute, selectRow } from './select';

/** Keys that a member chose for the review desk, as they are stored. */
export async function storedReviewKeys(labId: string, userId: string): Promise<unknown> {
  const row = await selectRow<{ keys: unknown }>(
    'SELECT review_keys AS keys FROM memberships WHERE lab_id = $1 AND user_id = $2',
    [labId, userId],
  );
  return row?.keys ?? {};
}

export const setReviewKeys = (labId: string, userId: string, keys: object): Promise<void> =>
  execute(
    'UPDATE memberships SET review_keys = $3::jsonb, updated_at = now() WHERE lab_id = $1 AND user_id = $2',
    [labId, userId, JSON.stringify(keys)],
  );
