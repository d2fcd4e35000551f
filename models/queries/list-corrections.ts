import type { z } from 'zod';
import { LabError, notFound } from '@/lib/errors';
import type { correctionListQuery } from '@/lib/schemas/list-query';
import type { PersonView } from '@/lib/views/common';
import type { CorrectionList, CorrectionsStored, CorrectionView } from '@/lib/views/correction-view';
import { inForce } from '@/tracking/corrections/in-force';
import { loggedOf, readLog, type LogRow } from './correction-log';
import { selectRow, selectRows } from './select';
import { StaleRevisionError } from './stale-revision';

interface Head {
  revision: number;
  nextTrack: number;
}

/** Corrections so far, and the number of the next new track. @throws LabError NOT_FOUND */
export async function correctionHead(labId: string, analysisId: string): Promise<Head> {
  const row = await selectRow<Head>(
    `SELECT a.tracks_revision AS revision, greatest(
       (SELECT coalesce(max(number) + 1, 0) FROM tracks WHERE analysis_id = a.id AND born_revision = 0),
       (SELECT coalesce(max(made_track) + 1, 0) FROM corrections WHERE analysis_id = a.id)) AS "nextTrack"
     FROM analyses a WHERE a.lab_id = $1 AND a.id = $2`,
    [labId, analysisId],
  );
  if (!row) throw notFound('analysis');
  return row;
}

/** Rows of a log as the API tells them. @param log the whole log, for which of them are in force */
export async function correctionViews(
  rows: readonly LogRow[],
  log: readonly LogRow[],
): Promise<CorrectionView[]> {
  const active = inForce(log.map(loggedOf));
  const people = await selectRows<PersonView>('SELECT id, name FROM users WHERE id = ANY($1::uuid[])', [
    [...new Set(rows.map(({ createdBy }) => createdBy))],
  ]);
  const personOf = new Map(people.map((person) => [person.id, person]));
  return rows.map((row) => ({
    ...(row.fields as Partial<CorrectionView>),
    id: row.id,
    createdAt: row.createdAt.toISOString(),
    updatedAt: row.createdAt.toISOString(),
    revision: row.seq,
    kind: row.kind,
    gesture: row.gesture,
    madeTrack: row.madeTrack,
    by: personOf.get(row.createdBy) ?? null,
    inForce: active[row.seq - 1] === 1,
  }));
}

/** The log by pages. @throws LabError NOT_FOUND, QUERY */
export async function listCorrections(
  labId: string,
  analysisId: string,
  query: z.output<typeof correctionListQuery>,
): Promise<CorrectionList> {
  const head = await correctionHead(labId, analysisId);
  const log = await readLog(labId, analysisId);
  const down = query.sort.startsWith('-');
  if (query.cursor !== undefined && !/^\d{1,9}$/.test(query.cursor)) {
    throw new LabError('QUERY', 'This cursor does not belong to this list and order.');
  }
  const after = query.cursor === undefined ? null : Number(query.cursor);
  const wanted = log
    .filter(({ seq }) => seq > (query.after ?? 0))
    .filter((row) => query.track === undefined || touches(row, query.track))
    .sort((a, b) => (down ? b.seq - a.seq : a.seq - b.seq))
    .filter(({ seq }) => after === null || (down ? seq < after : seq > after));
  const page = wanted.slice(0, query.limit);
  const nextCursor = wanted.length > page.length ? String(page[page.length - 1].seq) : null;
  return { ...head, items: await correctionViews(page, log), nextCursor };
}

const touches = ({ fields, madeTrack }: LogRow, track: number): boolean =>
  fields.track === track || fields.with === track || madeTrack === track;

/** Answer to corrections that are stored now. */
export async function storedCorrections(
  labId: string,
  analysisId: string,
  rows: readonly LogRow[],
): Promise<CorrectionsStored> {
  const head = await correctionHead(labId, analysisId);
  return { ...head, items: await correctionViews(rows, await readLog(labId, analysisId)) };
}

/**
 * Someone corrected first: carries what was appended since the revision that the sender knows, so that the sender
 * can lay its own corrections over it and send them again.
 */
export async function staleCorrections(
  labId: string,
  analysisId: string,
  known: number,
): Promise<StaleRevisionError> {
  const head = await correctionHead(labId, analysisId);
  const log = await readLog(labId, analysisId);
  const since = log.filter(({ seq }) => seq > known);
  return new StaleRevisionError({ ...head, corrections: await correctionViews(since, log) } as Head & {
    corrections: CorrectionView[];
  });
}
