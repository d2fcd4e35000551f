import type { Transaction } from 'sequelize';
import { LabError, notFound } from '@/lib/errors';
import { newId } from '@/lib/ids';
import type { VerdictInput } from '@/lib/schemas/review';
import type { OwnVerdictView, VerdictStepView } from '@/lib/views/review-view';
import { getSequelize } from '../database';
import {
  OUTCOME_COLUMNS,
  outcomeJoins,
  revisionSeen,
  seenOutcome,
  type OutcomeRow,
  type Sight,
} from './candidate-sight';
import { selectRow, selectRows } from './select';
import { StaleRevisionError } from './stale-revision';
import { assertNotSigned } from './signed-off';
import { writeAudit } from './write-audit';

interface Place extends OutcomeRow {
  id: string;
  analysis_id: string;
  event: number;
  revision: number;
  analysis_state: string;
  /** Of a rehearsal: its truth is known, and it is judged to measure readers. */
  rehearsed: boolean;
}

const PLACE = `SELECT c.id, c.analysis_id, c.event, c.revision, a.state AS analysis_state,
    EXISTS (SELECT FROM rehearsals h WHERE h.recording_id = a.recording_id) AS rehearsed, ${OUTCOME_COLUMNS}
  FROM candidates c JOIN analyses a ON a.id = c.analysis_id ${outcomeJoins('$3')}
  WHERE c.lab_id = $1 AND c.id = $2`;

/** @throws LabError NOT_FOUND */
async function placeOf(labId: string, candidateId: string, sight: Sight, transaction?: Transaction) {
  const row = await selectRow<Place>(PLACE, [labId, candidateId, sight.userId], transaction);
  if (!row) throw notFound('candidate');
  return row;
}

interface StepRow {
  verdict: VerdictStepView['verdict'];
  reason: string | null;
  note: string | null;
  created_at: Date;
}

export const stepView = ({ verdict, reason, note, created_at }: StepRow): VerdictStepView => ({
  verdict,
  reason,
  note,
  at: created_at.toISOString(),
});

/** What this person said of a candidate, with every step. @throws LabError NOT_FOUND */
export async function ownVerdict(
  labId: string,
  candidateId: string,
  sight: Sight,
  transaction?: Transaction,
): Promise<OwnVerdictView> {
  const place = await placeOf(labId, candidateId, sight, transaction);
  const steps = await selectRows<StepRow>(
    `SELECT verdict, reason, note, created_at FROM verdicts
     WHERE lab_id = $1 AND candidate_id = $2 AND reader_id = $3 ORDER BY step`,
    [labId, candidateId, sight.userId],
    transaction,
  );
  const last = steps.at(-1);
  return {
    candidateId,
    verdict: last?.verdict ?? null,
    reason: last?.reason ?? null,
    note: last?.note ?? null,
    history: steps.map(stepView),
    revision: revisionSeen(place.revision, place),
    review: seenOutcome(place, sight).review,
  };
}

/** What a verdict has changed. */
export interface GivenVerdict {
  own: OwnVerdictView;
  analysisId: string;
  /** False where the same had been stored before: sent again after its answer was lost. */
  stored: boolean;
  /** Its candidate is of a rehearsal: nothing follows from it. */
  rehearsed: boolean;
  state: OutcomeRow['state'];
}

/**
 * Adds what a person says of a candidate: their first verdict on it, or a change of mind. The same verdict sent again
 * changes nothing, so that a lost answer can't make two.
 * @param ifMatch revisions that the verdict starts from; null for any.
 * @throws LabError NOT_FOUND; STATE once it is settled or signed off; StaleRevisionError with what holds now.
 */
export async function giveVerdict(
  labId: string,
  candidateId: string,
  sight: Sight,
  ifMatch: number[] | null,
  input: VerdictInput,
  transaction: Transaction,
): Promise<GivenVerdict> {
  await lockCandidate(labId, candidateId, transaction);
  const place = await placeOf(labId, candidateId, sight, transaction);
  await assertJudgeable(labId, place, transaction);
  const before = await ownVerdict(labId, candidateId, sight, transaction);
  const { analysis_id: analysisId, rehearsed } = place;
  const given = { verdict: input.verdict, reason: input.reason ?? null, note: input.note || null };
  const same =
    before.verdict === given.verdict && before.reason === given.reason && before.note === given.note;
  const starts = ifMatch ?? [before.revision];
  if (same && (starts.includes(before.revision) || starts.includes(before.revision - 1))) {
    return { own: before, analysisId, rehearsed, stored: false, state: place.state };
  }
  if (place.state === 'settled') {
    throw new LabError('STATE', 'The principal investigator has settled this candidate: its verdict stands.');
  }
  if (!starts.includes(before.revision)) throw new StaleRevisionError(before);
  const knew =
    seenOutcome(place, sight).verdict !== null || (sight.seesOutcomes && place.state === 'disagreed');
  const changed = before.verdict !== null;
  await getSequelize().query(
    `INSERT INTO verdicts (id, lab_id, analysis_id, candidate_id, reader_id, step, verdict, reason, note, blind)
     VALUES ($1, $2, $3, $4, $5, $6, $7, $8, $9, $10)`,
    {
      bind: [
        newId(),
        labId,
        analysisId,
        candidateId,
        sight.userId,
        place.own_steps + 1,
        given.verdict,
        given.reason,
        given.note,
        !knew,
      ],
      transaction,
    },
  );
  // What was said stands in `verdicts`; the trail, which others read, says only that it was.
  const entry = { action: changed ? 'verdict.changed' : 'verdict.given', subjectKind: 'analysis', subjectId: analysisId }; // prettier-ignore
  const detail = { event: place.event, candidateId };
  await writeAudit({ labId, userId: sight.userId, ...entry, detail }, transaction);
  const { state } = await placeOf(labId, candidateId, sight, transaction);
  const own = await ownVerdict(labId, candidateId, sight, transaction);
  return { own, analysisId, rehearsed, stored: true, state };
}

/** Readers of one candidate write one after the other, so that each sees where it stands. */
export async function lockCandidate(
  labId: string,
  candidateId: string,
  transaction: Transaction,
): Promise<void> {
  await selectRow(
    'SELECT id FROM candidates WHERE lab_id = $1 AND id = $2 FOR UPDATE',
    [labId, candidateId],
    transaction,
  );
}

/** @throws LabError STATE */
export async function assertJudgeable(
  labId: string,
  { analysis_id, analysis_state }: Pick<Place, 'analysis_id' | 'analysis_state'>,
  transaction: Transaction,
): Promise<void> {
  if (analysis_state !== 'done') {
    throw new LabError('STATE', `There is nothing to judge: the analysis is ${analysis_state}.`);
  }
  await assertNotSigned(labId, analysis_id, transaction);
}
