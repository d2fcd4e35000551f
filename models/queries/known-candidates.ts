import { selectRows } from './select';

/**
 * Candidates of known truth that a reader judges among those of an analysis, as many as its campaign asks for: events
 * and others alike as far as there are enough. Only of rehearsals with the same pixel size and frame interval, so that
 * neither scale nor time tells them apart. Each reader has their own, and always the same while rehearsals stay.
 *
 * @returns ids in no order that means anything; empty for an analysis of a rehearsal.
 */
export async function knownCandidatesFor(
  labId: string,
  analysisId: string,
  readerId: string,
): Promise<string[]> {
  const rows = await selectRows<{ id: string }>(
    `WITH asked AS (
       SELECT a.conditions, k.known_candidates AS most FROM analyses a JOIN recordings g ON g.id = a.recording_id
         JOIN runs r ON r.id = g.run_id JOIN campaigns k ON k.id = r.campaign_id
       WHERE a.lab_id = $1 AND a.id = $2 AND NOT k.rehearsal)
     SELECT id FROM (SELECT c.id, md5($2::text || $3::text || c.id::text) AS lot,
         row_number() OVER (PARTITION BY t.true_event ORDER BY md5($2::text || $3::text || c.id::text)) AS place
       FROM asked, candidate_truths t JOIN candidates c ON c.id = t.candidate_id AND c.ended_revision IS NULL
         JOIN analyses b ON b.id = t.analysis_id AND b.state = 'done' AND b.signed_off_at IS NULL
         JOIN rehearsals h ON h.recording_id = b.recording_id AND h.deleted_at IS NULL
       WHERE t.lab_id = $1 AND ${alike('pixelSize_m')} AND ${alike('frameInterval_s')}) numbered
     ORDER BY place, lot LIMIT (SELECT coalesce(max(most), 0) FROM asked)`,
    [labId, analysisId, readerId],
  );
  return rows.map(({ id }) => id);
}

/** Equal but for what typing it in another unit may have rounded. */
const alike = (name: string): string =>
  `abs((b.conditions->>'${name}')::float8 / (asked.conditions->>'${name}')::float8 - 1) < 1e-9`;
