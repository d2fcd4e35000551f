import type { Transaction } from 'sequelize';
import type { CandidateFacts } from '@/lib/analysis-facts';
import { newId } from '@/lib/ids';
import { matchMeetings, type Meeting } from '@/tracking/corrections/match-candidates';
import type { Conditions, Recipe } from '@/tracking/types';
import { execute, selectRows } from './select';

/** Two tracks that meet a few frames earlier or later after a correction still meet the same way. */
const SAME_PAIR_FRAMES = 5;
const OTHER_PAIR_FRAMES = 2;

interface Row extends Meeting {
  id: string;
  event: number;
}

/**
 * Puts candidates of corrected tracks in place of the stored ones. One that is the same event keeps its
 * id, its number and all that people said of it; one that is none any more is kept out of sight, and
 * comes back as itself when it is one again; new ones get numbers that no event had.
 */
export async function replaceCandidates(
  { labId, analysisId, revision }: { labId: string; analysisId: string; revision: number },
  candidates: readonly CandidateFacts[],
  { conditions, recipe }: { conditions: Conditions; recipe: Recipe },
  transaction: Transaction,
): Promise<void> {
  const before = await selectRows<Row>(
    `SELECT id, event, track_a AS "trackA", track_b AS "trackB", t0_s AS "t0S",
       (facts->>'xPx')::float8 AS "xPx", (facts->>'yPx')::float8 AS "yPx"
     FROM candidates WHERE lab_id = $1 AND analysis_id = $2 ORDER BY event`,
    [labId, analysisId],
    transaction,
  );
  const dtS = conditions.frameInterval_s;
  const matched = matchMeetings(before, candidates, {
    samePairS: SAME_PAIR_FRAMES * dtS,
    otherPairS: OTHER_PAIR_FRAMES * dtS,
    otherPairPx: 2 * recipe.spotSizePx,
  });
  const kept = new Set<string>();
  let event = (before.at(-1)?.event ?? -1) + 1;
  for (const [i, facts] of candidates.entries()) {
    const { trackA, trackB, t0S, pChance, qValue, accepted } = facts;
    const values = [trackA, trackB, t0S, pChance, qValue, accepted, JSON.stringify(facts)];
    if (matched[i] >= 0) {
      const { id } = before[matched[i]];
      kept.add(id);
      await execute(
        `UPDATE candidates SET track_a = $2, track_b = $3, t0_s = $4, p_chance = $5, q_value = $6, accepted = $7,
           facts = $8::jsonb, ended_revision = NULL, revision = revision + 1, updated_at = now()
         WHERE id = $1 AND (facts <> $8::jsonb OR ended_revision IS NOT NULL)`,
        [id, ...values],
        transaction,
      );
      continue;
    }
    await execute(
      `INSERT INTO candidates (id, lab_id, analysis_id, event, track_a, track_b, t0_s, p_chance, q_value, accepted, facts)
       VALUES ($8, $9, $10, $11, $1, $2, $3, $4, $5, $6, $7)`,
      [...values, newId(), labId, analysisId, event++],
      transaction,
    );
  }
  await execute(
    `UPDATE candidates SET ended_revision = $3, revision = revision + 1, updated_at = now()
     WHERE lab_id = $1 AND analysis_id = $2 AND ended_revision IS NULL AND id = ANY($4::uuid[])`,
    [labId, analysisId, revision, before.filter(({ id }) => !kept.has(id)).map(({ id }) => id)],
    transaction,
  );
}
