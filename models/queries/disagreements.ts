import type { Transaction } from 'sequelize';
import type { z } from 'zod';
import type { Verdict } from '@/lib/review/verdict-words';
import type { disagreementListQuery } from '@/lib/schemas/review';
import type { ListView } from '@/lib/views/common';
import type { DisagreementView } from '@/lib/views/review-view';
import { listPage } from './list-page';
import { itemOf, type ItemRow } from './person';
import { execute, selectRows } from './select';
import { TAKEN } from './rehearsal-mark';
import { signedOffSql } from './signed-off';

interface Row extends ItemRow {
  analysis_id: string;
  recording_name: string;
  run_name: string;
  event: number;
  t0_s: number;
  answers: Verdict[];
}

/** Candidates on which readers disagree and nobody has decided, for those who settle. */
export async function listDisagreements(
  labId: string,
  query: z.output<typeof disagreementListQuery>,
): Promise<ListView<DisagreementView>> {
  const bind: unknown[] = [labId];
  const where = [
    'c.lab_id = $1',
    'c.ended_revision IS NULL',
    `o.state = 'disagreed'`,
    'g.deleted_at IS NULL',
    `NOT (${signedOffSql})`,
    TAKEN,
  ];
  if (query.analysis) where.push(`c.analysis_id = $${bind.push(query.analysis)}`);
  const page = await listPage<Row>(
    {
      select: `c.id, c.revision, c.created_at, c.updated_at, c.analysis_id, c.event, c.t0_s,
        g.name AS recording_name, r.name AS run_name,
        (SELECT array_agg(v.verdict ORDER BY v.verdict) FROM candidate_readings v WHERE v.candidate_id = c.id) AS answers`,
      from: `candidates c JOIN candidate_outcomes o ON o.candidate_id = c.id JOIN analyses a ON a.id = c.analysis_id
        JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id`,
      where,
      bind,
      idColumn: 'c.id',
      sorts: { createdAt: { by: 'c.created_at', type: 'timestamptz' } },
    },
    query,
  );
  return {
    items: page.rows.map((row) => ({
      ...itemOf(row),
      candidateId: row.id,
      analysisId: row.analysis_id,
      recordingName: row.recording_name,
      runName: row.run_name,
      event: row.event,
      t0_s: row.t0_s,
      answers: row.answers,
    })),
    nextCursor: page.nextCursor,
  };
}

/** Disagreements on an analysis of which nobody was told yet; they count as told from now on. */
export async function takeUntoldDisagreements(
  labId: string,
  analysisId: string,
  transaction: Transaction,
): Promise<{ id: string; event: number }[]> {
  const rows = await selectRows<{ id: string; event: number }>(
    `SELECT c.id, c.event FROM candidates c JOIN candidate_outcomes o ON o.candidate_id = c.id
     WHERE c.lab_id = $1 AND c.analysis_id = $2 AND c.ended_revision IS NULL AND o.state = 'disagreed'
       AND NOT EXISTS (SELECT FROM disagreement_notices n WHERE n.candidate_id = c.id)
     ORDER BY c.event`,
    [labId, analysisId],
    transaction,
  );
  for (const { id } of rows) {
    await execute(
      `INSERT INTO disagreement_notices (candidate_id, lab_id, analysis_id) VALUES ($1, $2, $3)
       ON CONFLICT DO NOTHING`,
      [id, labId, analysisId],
      transaction,
    );
  }
  return rows;
}
