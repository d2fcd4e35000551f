import type { Transaction } from 'sequelize';
import { grantFor, type Role } from '@/lib/access';
import type { AssignmentView } from '@/lib/views/review-view';
import { allJudged, endDoneAssignments } from '@/models/queries/assignments';
import { takeUntoldDisagreements } from '@/models/queries/disagreements';
import { selectRow, selectRows } from '@/models/queries/select';
import type { GivenVerdict } from '@/models/queries/verdicts';
import { askForStrips } from './compose-strips';
import { askForMail } from './send-mail';

interface Names {
  recordingId: string;
  recordingName: string;
  runName: string;
  tracksRevision: number;
}

const namesOf = (analysisId: string, transaction: Transaction) =>
  selectRow<Names>(
    `SELECT g.id AS "recordingId", g.name AS "recordingName", r.name AS "runName",
       a.tracks_revision AS "tracksRevision"
     FROM analyses a JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id WHERE a.id = $1`,
    [analysisId],
    transaction,
  );

/** Members who settle disagreements. */
async function settlersOf(labId: string, transaction: Transaction): Promise<string[]> {
  const rows = await selectRows<{ id: string; roles: Role[] }>(
    `SELECT u.id, m.roles FROM memberships m JOIN users u ON u.id = m.user_id
     WHERE m.lab_id = $1 AND u.disabled_at IS NULL`,
    [labId],
    transaction,
  );
  return rows.flatMap(({ id, roles }) => (grantFor(roles, 'settle') ? [id] : []));
}

/** Tells a reader of candidates that were given to them. */
export async function tellOfAssignment(
  labId: string,
  { analysisId, recordingName, runName, reader, assignedBy, candidates, dueOn }: AssignmentView,
  site: string | undefined,
  transaction: Transaction,
): Promise<void> {
  if (reader.id === assignedBy.id) return;
  const order = { kind: 'review-assigned', analysisId, recordingName, runName, byName: assignedBy.name, candidates, dueOn } as const; // prettier-ignore
  await askForMail({ labId, userId: reader.id, order, site }, transaction);
}

/**
 * What follows from a verdict, in the transaction that stores it: strips are composed from the first one on, which
 * also tells of disagreements; a set whose last candidate this was is done; and when every candidate has its readings,
 * those who settle hear of it. Nothing follows where the truth is known.
 */
export async function afterVerdict(
  labId: string,
  readerId: string,
  { analysisId, rehearsed, stored, state, own }: GivenVerdict,
  transaction: Transaction,
): Promise<void> {
  if (!stored || rehearsed) return;
  if (state === 'disagreed' || (await isFirst(analysisId, transaction))) {
    await askForStrips(labId, analysisId, transaction);
  }
  const names = await namesOf(analysisId, transaction);
  if (!names) return;
  const { recordingName, runName } = names;
  const order = { kind: 'review-done', analysisId, recordingName, runName } as const;
  for (const { reader, assignedById } of await endDoneAssignments(labId, analysisId, readerId, transaction)) {
    if (assignedById === readerId) continue;
    const readerName = reader.name;
    await askForMail({ labId, userId: assignedById, order: { ...order, readerName } }, transaction);
  }
  // Only a first verdict can be the one that completes the readings.
  if (state === 'open' || own.history.length > 1 || !(await allJudged(labId, analysisId, transaction)))
    return;
  if (await toldOfEnd(analysisId, transaction)) return;
  for (const userId of await settlersOf(labId, transaction)) {
    await askForMail({ labId, userId, order: { ...order, readerName: null } }, transaction);
  }
}

/** Whether only one verdict has been given on the analysis so far. */
async function isFirst(analysisId: string, transaction: Transaction): Promise<boolean> {
  const rows = await selectRows(
    'SELECT id FROM verdicts WHERE analysis_id = $1 LIMIT 2',
    [analysisId],
    transaction,
  );
  return rows.length === 1;
}

/** Readings beyond the number that is asked for complete nothing anew. */
async function toldOfEnd(analysisId: string, transaction: Transaction): Promise<boolean> {
  const row = await selectRow(
    `SELECT id FROM mails WHERE kind = 'review-done' AND facts->>'analysisId' = $1
       AND facts->>'readerName' IS NULL LIMIT 1`,
    [analysisId],
    transaction,
  );
  return row !== null;
}

/** Tells those who settle of disagreements that nobody was told of yet: once for all that have gathered. */
export async function tellOfDisagreements(
  labId: string,
  analysisId: string,
  transaction: Transaction,
): Promise<void> {
  const candidates = await takeUntoldDisagreements(labId, analysisId, transaction);
  const names = candidates.length > 0 ? await namesOf(analysisId, transaction) : null;
  if (!names) return;
  const order = { kind: 'review-disagreement', analysisId, ...names, candidates } as const;
  for (const userId of await settlersOf(labId, transaction)) {
    await askForMail({ labId, userId, order }, transaction);
  }
}
