import { notFound } from '@/lib/errors';
import type { PresenceView } from '@/lib/views/correction-view';
import { execute, selectRow, selectRows } from './select';

/** Pages renew their presence every 10 s; whoever was silent for three of these is gone, s. */
const PRESENT_S = 30;

/** Who has an analysis open now, but for one person; those who came last first. @throws LabError NOT_FOUND */
export async function presencesOf(
  labId: string,
  analysisId: string,
  exceptUserId: string,
): Promise<{ items: PresenceView[] }> {
  const known = await selectRow('SELECT id FROM analyses WHERE lab_id = $1 AND id = $2', [labId, analysisId]);
  if (!known) throw notFound('analysis');
  const rows = await selectRows<{
    id: string;
    name: string;
    place: string;
    frame: number | null;
    seen: Date;
  }>(
    `SELECT u.id, u.name, p.place, p.frame, p.seen_at AS seen
     FROM presences p JOIN users u ON u.id = p.user_id
     WHERE p.lab_id = $1 AND p.analysis_id = $2 AND p.user_id <> $3
       AND p.seen_at > now() - make_interval(secs => ${PRESENT_S})
     ORDER BY p.seen_at DESC, u.id`,
    [labId, analysisId, exceptUserId],
  );
  return {
    items: rows.map(({ id, name, place, frame, seen }) => ({
      person: { id, name },
      place,
      frame,
      seenAt: seen.toISOString(),
    })),
  };
}

/** A sign of life of someone who has an analysis open; old signs of everybody on it are swept away. */
export async function renewPresence(
  { labId, analysisId, userId }: { labId: string; analysisId: string; userId: string },
  { place, frame }: { place: string; frame: number | null },
): Promise<void> {
  await execute(
    `INSERT INTO presences (analysis_id, user_id, lab_id, place, frame)
     SELECT id, $3, lab_id, $4, $5 FROM analyses WHERE lab_id = $1 AND id = $2
     ON CONFLICT (analysis_id, user_id) DO UPDATE SET place = $4, frame = $5, seen_at = now()`,
    [labId, analysisId, userId, place, frame],
  );
  await execute(
    `DELETE FROM presences WHERE lab_id = $1 AND analysis_id = $2 AND seen_at < now() - interval '1 hour'`,
    [labId, analysisId],
  );
}
