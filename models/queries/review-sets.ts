import type { z } from 'zod';
import type { reviewListQuery } from '@/lib/schemas/review';
import type { ListView } from '@/lib/views/common';
import type { ReviewSetView } from '@/lib/views/review-view';
import { outcomeJoins, type Sight } from './candidate-sight';
import { listPage } from './list-page';
import { itemOf, type ItemRow } from './person';
import { TAKEN } from './rehearsal-mark';
import { waitsSql } from './review-queue';
import { selectRow } from './select';
import { signedOffSql } from './signed-off';

interface Row extends ItemRow {
  recording_name: string;
  run_name: string;
  campaign_id: string;
  campaign_name: string;
  readings: number;
  candidates: number;
  accepted: number;
  own: number;
  waiting: number;
  judged: number;
  disagreed: number;
  events: number;
  signed: boolean;
}

const counts = (reader: string) => `(SELECT count(*)::int AS candidates,
    count(*) FILTER (WHERE c.accepted)::int AS accepted,
    count(*) FILTER (WHERE own.verdict IS NOT NULL)::int AS own,
    count(*) FILTER (WHERE ${waitsSql(reader)})::int AS waiting,
    count(*) FILTER (WHERE o.state <> 'open')::int AS judged,
    count(*) FILTER (WHERE o.state = 'disagreed')::int AS disagreed,
    count(*) FILTER (WHERE o.verdict = 'yes')::int AS events
  FROM candidates c ${outcomeJoins(reader)} WHERE c.analysis_id = a.id AND c.ended_revision IS NULL)`;

/** Analyses with candidates and how far they are judged. */
export async function listReviewSets(
  labId: string,
  query: z.output<typeof reviewListQuery>,
  sight: Sight & { mayReview: boolean },
): Promise<ListView<ReviewSetView>> {
  const bind: unknown[] = [labId, sight.userId];
  const where = [
    'a.lab_id = $1',
    `a.state = 'done'`,
    'g.deleted_at IS NULL',
    'r.deleted_at IS NULL',
    'k.deleted_at IS NULL',
    'n.candidates > 0',
    // What was made for a rehearsal waits for nobody; it is mixed in where readers are measured.
    TAKEN,
  ];
  if (query.campaign) where.push(`k.id = $${bind.push(query.campaign)}`);
  const page = await listPage<Row>(
    {
      select: `a.id, a.revision, a.created_at, a.updated_at, g.name AS recording_name, r.name AS run_name,
        k.id AS campaign_id, k.name AS campaign_name, k.readings, n.*, ${signedOffSql} AS signed`,
      from: `analyses a JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id
        JOIN campaigns k ON k.id = r.campaign_id CROSS JOIN LATERAL ${counts('$2')} n`,
      where,
      bind,
      idColumn: 'a.id',
      sorts: {
        finishedAt: { by: 'coalesce(a.finished_at, a.created_at)', type: 'timestamptz' },
        updatedAt: { by: 'a.updated_at', type: 'timestamptz' },
        candidates: { by: 'n.candidates', type: 'int' },
      },
    },
    query,
  );
  return { items: page.rows.map((row) => viewOf(row, sight)), nextCursor: page.nextCursor };
}

function viewOf(row: Row, { seesOutcomes, mayReview }: Sight & { mayReview: boolean }): ReviewSetView {
  const { judged, disagreed, events } = row;
  return {
    ...itemOf(row),
    analysisId: row.id,
    recordingName: row.recording_name,
    runName: row.run_name,
    campaignId: row.campaign_id,
    campaignName: row.campaign_name,
    readings: row.readings,
    candidates: row.candidates,
    accepted: row.accepted,
    own: row.own,
    waiting: mayReview ? row.waiting : 0,
    progress: seesOutcomes ? { judged, disagreed, events } : null,
    signedOff: row.signed,
  };
}

/** What waits in a laboratory for this person: candidates to judge, disagreements to settle. */
export async function reviewCounts(
  labId: string,
  userId: string,
): Promise<{ waiting: number; disagreed: number }> {
  const row = await selectRow<{ waiting: number; disagreed: number }>(
    `SELECT count(*) FILTER (WHERE ${waitsSql('$2')})::int AS waiting,
       count(*) FILTER (WHERE o.state = 'disagreed')::int AS disagreed
     FROM candidates c JOIN analyses a ON a.id = c.analysis_id AND a.state = 'done'
       JOIN recordings g ON g.id = a.recording_id AND g.deleted_at IS NULL
       JOIN runs r ON r.id = g.run_id AND r.deleted_at IS NULL ${outcomeJoins('$2')}
     WHERE c.lab_id = $1 AND c.ended_revision IS NULL AND ${TAKEN} AND NOT (${signedOffSql})`,
    [labId, userId],
  );
  return row!;
}
