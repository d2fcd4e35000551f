import type { z } from 'zod';
import type { CandidateFacts } from '@/lib/analysis-facts';
import type { candidateListQuery } from '@/lib/schemas/list-query';
import type { CandidateView } from '@/lib/views/analysis-view';
import type { ListView } from '@/lib/views/common';
import {
  OUTCOME_COLUMNS,
  outcomeJoins,
  revisionSeen,
  seenOutcome,
  type OutcomeRow,
  type Sight,
} from './candidate-sight';
import { listPage, type ListSource } from './list-page';
import { itemOf, type ItemRow } from './person';
import { measuresOf } from './read-results';

export interface CandidateRow extends ItemRow, OutcomeRow {
  analysis_id: string;
  event: number;
  accepted: boolean;
  facts: CandidateFacts;
}

/** Columns of `CandidateRow`, from `candidates c` with `outcomeJoins`. */
export const CANDIDATE_COLUMNS = `c.id, c.analysis_id, c.event, c.accepted, c.facts, c.revision, c.created_at,
  c.updated_at, ${OUTCOME_COLUMNS}`;

const SORTS: ListSource['sorts'] = {
  event: { by: 'c.event', type: 'int' },
  t0_s: { by: 'c.t0_s', type: 'float8' },
  qValue: { by: `coalesce(c.q_value, 'infinity'::float8)`, type: 'float8' },
  minSeparation_m: {
    by: `coalesce((c.facts->>'minSeparationM')::float8, 'infinity'::float8)`,
    type: 'float8',
  },
};

/** Pairs of tracks that meet and part, by pages. @throws LabError NOT_FOUND, NOT_COMPUTED */
export async function listCandidates(
  labId: string,
  analysisId: string,
  query: z.output<typeof candidateListQuery>,
  sight: Sight,
): Promise<ListView<CandidateView>> {
  await measuresOf(labId, analysisId);
  const bind: unknown[] = [labId, analysisId, sight.userId];
  const where = ['c.lab_id = $1', 'c.analysis_id = $2', 'c.ended_revision IS NULL'];
  if (query.accepted) where.push(`c.accepted = $${bind.push(query.accepted === 'true')}`);
  const page = await listPage<CandidateRow>(
    {
      select: CANDIDATE_COLUMNS,
      from: `candidates c ${outcomeJoins('$3')}`,
      where,
      bind,
      idColumn: 'c.id',
      sorts: SORTS,
    },
    query,
  );
  return { items: page.rows.map((row) => candidateView(row, sight)), nextCursor: page.nextCursor };
}

function sideView(fit: CandidateFacts['before']): CandidateView['before'] {
  if (!fit) return null;
  const { points, amplitude, amplitudeError, exponent, exponentError } = fit;
  return { points, amplitude, amplitudeError, exponent, exponentError };
}

/** A candidate as this person may see it. */
export function candidateView(row: CandidateRow, sight: Sight): CandidateView {
  const { facts } = row;
  return {
    ...itemOf(row),
    revision: revisionSeen(row.revision, row),
    analysisId: row.analysis_id,
    event: row.event,
    trackA: facts.trackA,
    trackB: facts.trackB,
    t0_s: facts.t0S,
    t0Error_s: facts.t0ErrorS,
    x_px: facts.xPx,
    y_px: facts.yPx,
    minSeparation_m: facts.minSeparationM,
    before: sideView(facts.before),
    after: sideView(facts.after),
    pChance: facts.pChance,
    qValue: facts.qValue,
    accepted: row.accepted,
    ...seenOutcome(row, sight),
    failed: facts.failed,
    series: {
      frame: facts.series.frame,
      t_s: facts.series.tS,
      separation_m: facts.series.separationM,
      error_m: facts.series.errorM,
      law_m: facts.series.lawM,
      flyBy_m: facts.series.flyByM,
    },
  };
}
