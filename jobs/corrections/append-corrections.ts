import type { Transaction } from 'sequelize';
import { LabError } from '@/lib/errors';
import { newId } from '@/lib/ids';
import type { CorrectionInput } from '@/lib/schemas/correction';
import type { CorrectionsStored } from '@/lib/views/correction-view';
import { getSequelize } from '@/models/database';
import { lockCorrectable, type Correctable } from '@/models/queries/correctable';
import {
  gesturesUsed,
  lastOfLog,
  loggedOf,
  readLog,
  rowsOfRequest,
  type LogRow,
} from '@/models/queries/correction-log';
import { staleCorrections, storedCorrections } from '@/models/queries/list-corrections';
import { cutsGesture, undosBackTo } from '@/tracking/corrections/back-to';
import type { LoggedCorrection } from '@/tracking/corrections/correction';
import { applyToCurrent, RefusedAt, replay } from './next-state';
import { storeCorrections } from './store-corrections';

/** Who corrects what, starting from which revision (null: any). */
export interface CorrectionRequest {
  labId: string;
  analysisId: string;
  userId: string;
  ifMatch: number[] | null;
  /** Idempotency-Key: the same request sent again is stored once, whatever became of the first answer. */
  requestKey: string | null;
}

class Stale extends Error {}

/**
 * Runs a change of the log with the analysis's row locked; a request that was stored before is answered again.
 * @throws LabError NOT_FOUND, STATE; StaleRevisionError with what was appended since
 */
export async function changeLog(
  request: CorrectionRequest,
  change: (analysis: Correctable, transaction: Transaction) => Promise<LogRow[]>,
): Promise<CorrectionsStored> {
  const { labId, analysisId, userId, ifMatch, requestKey } = request;
  try {
    const rows = await getSequelize().transaction(async (transaction) => {
      const analysis = await lockCorrectable(labId, analysisId, transaction);
      if (requestKey !== null) {
        const found = await rowsOfRequest({ labId, analysisId, userId, key: requestKey }, transaction);
        if (found.length > 0) return found;
      }
      if (ifMatch !== null && !ifMatch.includes(analysis.revision)) throw new Stale();
      return change(analysis, transaction);
    });
    return await storedCorrections(labId, analysisId, rows);
  } catch (cause) {
    if (cause instanceof Stale) throw await staleCorrections(labId, analysisId, Math.max(...ifMatch!));
    throw cause;
  }
}

/**
 * Appends corrections, all or none.
 * @param listed the corrections came as a list: refusals then name the place in it
 */
export function appendCorrections(
  request: CorrectionRequest,
  corrections: readonly CorrectionInput[],
  listed: boolean,
): Promise<CorrectionsStored> {
  return changeLog(request, async (analysis, transaction) => {
    await assertGesturesOpen(request, corrections, listed, transaction);
    const entries = corrections.map((one): LoggedCorrection => ({ ...one, id: newId() }));
    const next = await refusals(listed, async () =>
      entries.some(({ kind }) => kind === 'undo')
        ? replay(analysis, await readLog(analysis.labId, analysis.id, transaction), entries, transaction)
        : applyToCurrent(analysis, entries, transaction),
    );
    const { userId, requestKey } = request;
    return storeCorrections({ analysis, userId, corrections: entries, next, requestKey }, transaction);
  });
}

/**
 * Leads the tracks back to what they were at a revision, by undos that are appended as one gesture.
 * @throws LabError INVALID for a revision that is not there, or that is in the middle of a gesture
 */
export function restoreRevision(request: CorrectionRequest, revision: number): Promise<CorrectionsStored> {
  return changeLog(request, async (analysis, transaction) => {
    const invalid = (message: string) =>
      new LabError('INVALID', message, { errors: [{ path: 'revision', message }] });
    if (revision > analysis.revision) {
      throw invalid(`There are revisions 0 to ${analysis.revision}. Received ${revision}.`);
    }
    const rows = await readLog(analysis.labId, analysis.id, transaction);
    const log = rows.map(loggedOf);
    if (cutsGesture(log, revision)) {
      throw invalid(`Revision ${revision} is in the middle of a gesture: choose the one before or after it.`);
    }
    const gesture = newId();
    const entries = undosBackTo(log, revision, newId).map((undo) => ({ ...undo, gesture }));
    if (entries.length === 0) throw invalid(`The tracks are as at revision ${revision} already.`);
    const next = await refusals(false, () => replay(analysis, rows, entries, transaction, true));
    const { userId, requestKey } = request;
    return storeCorrections(
      {
        analysis,
        userId,
        corrections: entries,
        next,
        requestKey,
        action: 'analysis.corrections-restored',
        detail: { to: revision },
      },
      transaction,
    );
  });
}

/** Refusals of the kernel as those of the API. */
async function refusals<T>(listed: boolean, work: () => Promise<T>): Promise<T> {
  try {
    return await work();
  } catch (cause) {
    if (!(cause instanceof RefusedAt)) throw cause;
    const { refusal, place } = cause;
    const path = listed ? `corrections.${place}${refusal.path ? `.${refusal.path}` : ''}` : refusal.path;
    const code = refusal.dependents.length > 0 ? 'STATE' : 'INVALID';
    throw new LabError(code, refusal.message, { errors: [{ path, message: refusal.message }], cause });
  }
}

/** A gesture is one stretch of the log, of one person: what others did in between must not go with it. */
async function assertGesturesOpen(
  { labId, analysisId, userId }: CorrectionRequest,
  corrections: readonly CorrectionInput[],
  listed: boolean,
  transaction: Transaction,
): Promise<void> {
  const named = corrections.flatMap(({ gesture }) => (gesture ? [gesture] : []));
  if (named.length === 0) return;
  const used = await gesturesUsed(labId, analysisId, [...new Set(named)], transaction);
  const last = await lastOfLog(labId, analysisId, transaction);
  const ended = new Set(used);
  let open = last && last.createdBy === userId ? last.gesture : null;
  corrections.forEach(({ gesture }, place) => {
    if (gesture && gesture !== open && ended.has(gesture)) {
      const message = 'This gesture has ended: give later corrections a gesture of their own.';
      const path = listed ? `corrections.${place}.gesture` : 'gesture';
      throw new LabError('INVALID', message, { errors: [{ path, message }] });
    }
    if (gesture) ended.add(gesture);
    open = gesture ?? null;
  });
}
