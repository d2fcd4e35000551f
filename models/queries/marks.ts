import type { MarksView } from '@/lib/views/correction-view';
import { isMark } from '@/tracking/corrections/correction';
import { inForce } from '@/tracking/corrections/in-force';
import { markedFrames, type MarkedFrame } from '@/tracking/corrections/marked-frames';
import { loggedOf, readLog, type LogRow } from './correction-log';
import { correctionHead, correctionViews } from './list-corrections';

/** Marks of lines that are in force, in the order in which they were made. @throws LabError NOT_FOUND */
export async function listMarks(labId: string, analysisId: string): Promise<MarksView> {
  const { revision } = await correctionHead(labId, analysisId);
  const log = await readLog(labId, analysisId);
  const marks = log.filter(isMark);
  const views = await correctionViews(marks, log);
  return {
    // As of the log that was read, which may be newer than the head.
    revision: Math.max(revision, log.length),
    items: views
      .filter((view) => view.inForce)
      .map(({ id, gesture, kind, frame, points, by, createdAt }) => ({
        id,
        gesture,
        kind: kind as MarksView['items'][number]['kind'],
        frame: frame!,
        ...(points ? { points } : {}),
        by,
        createdAt,
      })),
  };
}

/** Marks of lines at a revision of the tracks, by frame. */
export function marksAt(log: readonly LogRow[], revision: number): MarkedFrame[] {
  const entries = log.filter(({ seq }) => seq <= revision).map(loggedOf);
  return markedFrames(entries, inForce(entries));
}

/** Whether the tracks of two revisions are the same because only marks were made or taken back between them. */
export function onlyMarksBetween(log: readonly LogRow[], earlier: number, later: number): boolean {
  const onTracks = (revision: number) => {
    const entries = log.filter(({ seq }) => seq <= revision).map(loggedOf);
    const active = inForce(entries);
    return entries
      .filter((entry, place) => active[place] === 1 && entry.kind !== 'undo' && !isMark(entry))
      .map(({ id }) => id);
  };
  const [before, after] = [onTracks(earlier), onTracks(later)];
  return before.length === after.length && before.every((id, i) => id === after[i]);
}
