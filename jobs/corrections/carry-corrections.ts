import type { Transaction } from 'sequelize';
import { LabError } from '@/lib/errors';
import { correctionWords } from '@/lib/correction-words';
import { newId } from '@/lib/ids';
import type { CarryReport } from '@/lib/views/correction-view';
import type { Correctable } from '@/models/queries/correctable';
import { carriedBefore, loggedOf, readLog, type LogRow } from '@/models/queries/correction-log';
import { correctionViews } from '@/models/queries/list-corrections';
import { streamTracks } from '@/models/queries/read-tracks';
import { selectRow } from '@/models/queries/select';
import {
  carryCorrections,
  placesTouched,
  type Carried,
  type CarrySource,
} from '@/tracking/corrections/carry-corrections';
import type { LoggedCorrection } from '@/tracking/corrections/correction';
import { isMeasured, withGiven, type EditedTrack } from '@/tracking/corrections/edited-track';
import type { NearPlaces } from '@/tracking/corrections/same-place';
import { changeLog, type CorrectionRequest } from './append-corrections';
import { applyToCurrent, rawTracksOf } from './next-state';
import { storeCorrections } from './store-corrections';

export interface CarryRequest extends CorrectionRequest {
  /** The analysis whose corrections are carried. */
  from: string;
  /** Only tells what would become of them. */
  preview: boolean;
}

const NOTHING: Carried = { changes: [], outcomes: [] };

/**
 * Carries the corrections in force of another analysis of the same recording to this one, as far as they can be said
 * on its tracks; all that are carried are stored at once. What was carried before is not carried again.
 * @throws LabError INVALID for an analysis that is no finished one of the same recording; as `changeLog`
 */
export async function carryFrom(request: CarryRequest): Promise<CarryReport> {
  const { labId, userId, requestKey, from, preview } = request;
  let rows: LogRow[] = [];
  let known = 0;
  let carried: Carried | null = null;
  const stored = await changeLog(request, async (analysis, transaction) => {
    const source = await sourceOf(analysis, from, transaction);
    rows = await readLog(labId, from, transaction);
    const log = rows.map(loggedOf);
    known = await lastCarried(analysis, rows, transaction);
    const raw = await rawTracksOf(source, log, transaction);
    carried = await carry({ raw, log, from: known }, analysis);
    if (preview || carried.changes.length === 0) return [];
    const corrections = entriesOf(carried, rows);
    const next = await applyToCurrent(analysis, corrections, transaction);
    const counts = countsOf(carried);
    return storeCorrections(
      {
        analysis,
        userId,
        corrections,
        next,
        requestKey,
        action: 'analysis.corrections-carried',
        detail: { from, carried: counts.carried, left: counts.left },
      },
      transaction,
    );
  });
  const { outcomes } = carried ?? NOTHING;
  const views = await correctionViews(rows, rows);
  return {
    revision: stored.revision,
    nextTrack: stored.nextTrack,
    preview,
    // Sent again after its answer was lost: what the first one stored.
    carried: carried ? countsOf(carried).carried : new Set(stored.items.map((item) => item.carriedFrom)).size,
    already: outcomes.filter(({ outcome }) => outcome === 'already').length,
    before: known,
    left: outcomes.flatMap(({ place, outcome, reason }) =>
      outcome === 'left'
        ? [{ correction: views[place], words: correctionWords(views[place]), reason: reason ?? '' }]
        : [],
    ),
  };
}

const countsOf = ({ outcomes }: Carried) => ({
  carried: outcomes.filter(({ outcome }) => outcome === 'carried').length,
  left: outcomes.filter(({ outcome }) => outcome === 'left').length,
});

async function sourceOf(
  analysis: Correctable,
  from: string,
  transaction: Transaction,
): Promise<{ id: string; rawCount: number }> {
  const source = await selectRow<{ id: string; rawCount: number }>(
    `SELECT a.id, (SELECT coalesce(max(number) + 1, 0) FROM tracks
       WHERE analysis_id = a.id AND born_revision = 0) AS "rawCount"
     FROM analyses a WHERE a.lab_id = $1 AND a.id = $2 AND a.recording_id = $3 AND a.state = 'done' AND a.id <> $4`,
    [analysis.labId, from, analysis.recordingId, analysis.id],
    transaction,
  );
  if (source) return source;
  const message = 'from must be another finished analysis of the same recording.';
  throw new LabError('INVALID', message, { errors: [{ path: 'from', message }] });
}

/** Place in the source's log behind the last correction that was carried here before. */
async function lastCarried(
  analysis: Correctable,
  rows: readonly LogRow[],
  transaction: Transaction,
): Promise<number> {
  const before = await carriedBefore(analysis.labId, analysis.id, transaction);
  return rows.findLastIndex(({ id }) => before.has(id)) + 1;
}

/** Tracks come in a stream, and only those near what was corrected stay in memory. */
async function carry(source: CarrySource, analysis: Correctable): Promise<Carried> {
  const near = placesTouched(source);
  const tracks: EditedTrack[] = [];
  for await (const track of streamTracks(analysis.labId, analysis.id, analysis.revision)) {
    const edited = withGiven(track, track.given ?? []);
    if (comesNear(edited, near)) tracks.push(edited);
  }
  return carryCorrections(source, { tracks, nextNumber: analysis.nextNumber }, analysis);
}

const comesNear = (track: EditedTrack, near: NearPlaces): boolean =>
  track.frame.some((frame, i) => isMeasured(track, i) && near.has(frame, track.xPx[i], track.yPx[i]));

/** Entries of the log, each with the correction that it comes from. */
function entriesOf({ changes }: Carried, rows: readonly LogRow[]): LoggedCorrection[] {
  const gestures = new Map<number, string>();
  return changes.map(({ change, of, group }) => {
    if (group !== null && !gestures.has(group)) gestures.set(group, newId());
    const gesture = group === null ? null : gestures.get(group)!;
    // Stored beside what the kind needs; the kernels take no notice of it.
    const entry = { ...change, id: newId(), gesture, carriedFrom: rows[of].id };
    return entry;
  });
}
