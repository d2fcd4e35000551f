import type { Transaction } from 'sequelize';
import { LabError, notFound } from '@/lib/errors';
import { newId } from '@/lib/ids';
import type { Verdict } from '@/lib/review/verdict-words';
import type { SettlementInput } from '@/lib/schemas/review';
import type { PersonView } from '@/lib/views/common';
import type { ReadingsView } from '@/lib/views/review-view';
import { personJson } from './person';
import { execute, selectRow, selectRows } from './select';
import { assertJudgeable, lockCandidate, stepView } from './verdicts';
import { writeAudit } from './write-audit';

interface Place {
  analysis_id: string;
  analysis_state: string;
  event: number;
  state: 'open' | 'agreed' | 'disagreed' | 'settled';
  verdict: Verdict | null;
  readers: number;
}

async function placeOf(labId: string, candidateId: string, transaction?: Transaction): Promise<Place> {
  const row = await selectRow<Place>(
    `SELECT c.analysis_id, a.state AS analysis_state, c.event, o.state, o.verdict, o.readers
     FROM candidates c JOIN analyses a ON a.id = c.analysis_id JOIN candidate_outcomes o ON o.candidate_id = c.id
     WHERE c.lab_id = $1 AND c.id = $2`,
    [labId, candidateId],
    transaction,
  );
  if (!row) throw notFound('candidate');
  return row;
}

/**
 * The principal investigator's word on a candidate that was judged; a later one takes the place of an earlier.
 * @throws LabError NOT_FOUND; STATE before anybody has judged it, or once the analysis was signed off.
 */
export async function settle(
  maker: { labId: string; userId: string },
  candidateId: string,
  { verdict, reason }: SettlementInput,
  transaction: Transaction,
): Promise<{ analysisId: string }> {
  const { labId, userId } = maker;
  await lockCandidate(labId, candidateId, transaction);
  const place = await placeOf(labId, candidateId, transaction);
  await assertJudgeable(labId, place, transaction);
  if (place.readers === 0) throw new LabError('STATE', 'Nobody has judged this candidate yet.');
  await execute(
    `INSERT INTO settlements (id, lab_id, analysis_id, candidate_id, step, verdict, reason, settled_by)
     SELECT $1, $2, $3, $4, count(*) + 1, $5, $6, $7 FROM settlements WHERE candidate_id = $4`,
    [newId(), labId, place.analysis_id, candidateId, verdict, reason, userId],
    transaction,
  );
  await execute(
    'UPDATE candidates SET revision = revision + 1, updated_at = now() WHERE lab_id = $1 AND id = $2',
    [labId, candidateId],
    transaction,
  );
  const entry = { action: 'verdict.settled', subjectKind: 'analysis', subjectId: place.analysis_id };
  await writeAudit(
    { labId, userId, ...entry, detail: { event: place.event, candidateId, verdict, reason } },
    transaction,
  );
  return { analysisId: place.analysis_id };
}

interface StepRow {
  verdict: Verdict;
  reason: string | null;
  note: string | null;
  blind: boolean;
  created_at: Date;
  reader: PersonView;
}

/**
 * Everything that was said of a candidate.
 * @param ownOnly of whom alone, for somebody who still has to judge it blind.
 * @throws LabError NOT_FOUND
 */
export async function readingsOf(
  labId: string,
  candidateId: string,
  ownOnly: string | null,
): Promise<ReadingsView> {
  const place = await placeOf(labId, candidateId);
  const steps = await selectRows<StepRow>(
    `SELECT v.verdict, v.reason, v.note, v.blind, v.created_at, ${personJson('u')} AS reader
     FROM verdicts v JOIN users u ON u.id = v.reader_id
     WHERE v.lab_id = $1 AND v.candidate_id = $2 AND ($3::uuid IS NULL OR v.reader_id = $3)
     ORDER BY v.created_at, v.step`,
    [labId, candidateId, ownOnly],
  );
  const byReader = new Map<string, StepRow[]>();
  for (const step of steps) byReader.set(step.reader.id, [...(byReader.get(step.reader.id) ?? []), step]);
  const settlements = await selectRows<{
    verdict: Verdict;
    reason: string;
    created_at: Date;
    by: PersonView;
  }>(
    `SELECT s.verdict, s.reason, s.created_at, ${personJson('u')} AS by
     FROM settlements s JOIN users u ON u.id = s.settled_by
     WHERE s.lab_id = $1 AND s.candidate_id = $2 ORDER BY s.step`,
    [labId, candidateId],
  );
  return {
    candidateId,
    review: ownOnly ? 'hidden' : place.state,
    verdict: ownOnly ? null : place.verdict,
    readings: [...byReader.values()].map((history) => {
      const last = history.at(-1)!;
      return { ...stepView(last), reader: last.reader, blind: last.blind, history: history.map(stepView) };
    }),
    settlements: settlements.map(({ verdict, reason, by, created_at }) => ({
      verdict,
      reason,
      by,
      at: created_at.toISOString(),
    })),
  };
}
