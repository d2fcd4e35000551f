import type { RunConditionsInput } from '@/lib/schemas/conditions';
import { TAKEN } from './rehearsal-mark';
import { CONDITION_COLUMNS, conditionsOf, type ConditionRow } from './run-columns';
import { selectRows } from './select';

/** A choice that is longer than this helps nobody. */
const CHOICES = 100;

/** Runs whose conditions can be rehearsed, newest first. */
export async function plannedRuns(
  labId: string,
): Promise<{ id: string; name: string; conditions: RunConditionsInput }[]> {
  // prettier-ignore
  const columns = Object.values(CONDITION_COLUMNS).map((column) => `r.${column}`).join(', '); // prettier-ignore
  const rows = await selectRows<ConditionRow & { id: string; name: string; campaign: string }>(
    `SELECT r.id, r.name, c.name AS campaign, ${columns} FROM runs r JOIN campaigns c ON c.id = r.campaign_id
     WHERE r.lab_id = $1 AND r.deleted_at IS NULL AND c.deleted_at IS NULL AND NOT c.rehearsal
     ORDER BY r.created_at DESC, r.id DESC LIMIT ${CHOICES}`,
    [labId],
  );
  return rows.map((row) => ({ id: row.id, name: `${row.campaign}: ${row.name}`, conditions: conditionsOf(row) })); // prettier-ignore
}

/** Recordings in which particles can be planted, newest first. */
export function plantableRecordings(labId: string): Promise<{ id: string; name: string }[]> {
  return selectRows<{ id: string; name: string }>(
    `SELECT g.id, r.name || ': ' || g.name AS name FROM recordings g JOIN runs r ON r.id = g.run_id
     WHERE g.lab_id = $1 AND g.state = 'ready' AND g.bit_depth <= 16 AND g.deleted_at IS NULL
       AND r.deleted_at IS NULL AND r.pixel_size_m IS NOT NULL AND r.frame_interval_s IS NOT NULL AND ${TAKEN}
     ORDER BY g.created_at DESC, g.id DESC LIMIT ${CHOICES}`,
    [labId],
  );
}
