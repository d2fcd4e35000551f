import type { Point } from '@/components/canvas/view-box';
import type { RefinedPoint } from '@/components/editor/edit-state';
import type { StoredCorrection } from '@/components/editor/log/stored-correction';
import type { CorrectionsApi } from '@/components/editor/log/gesture-sender';
import type { PersonHere } from '@/components/editor/people-here';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { CorrectionList, CorrectionsStored, CorrectionView, MarksView, PresenceView, RefinedPoint as RefinedView, TrackPointsView } from '@/lib/views/correction-view'; // prettier-ignore
import type { Correction, Mark } from '@/tracking/corrections/correction';
import { api, ApiError } from './api-client';
import { analysisPath } from './use-analysis';

const PAGE = 200;

/** The fields of a stored correction that are its own. */
export function correctionOf(view: CorrectionView): Correction {
  const {
    kind,
    track,
    with: other,
    frame,
    from,
    to,
    x_px,
    y_px,
    sx_px,
    sy_px,
    brightness,
    population,
    points,
    of,
  } = view;
  const fields = {
    kind,
    track,
    with: other,
    frame,
    from,
    to,
    x_px,
    y_px,
    sx_px,
    sy_px,
    brightness,
    population,
    points,
    of,
  };
  return Object.fromEntries(Object.entries(fields).filter(([, value]) => value !== undefined)) as Correction;
}

/** Stored corrections as the editor takes them; what an undo takes back is looked up among those seen before. */
export function correctionReader(): (views: readonly CorrectionView[]) => StoredCorrection[] {
  const seen = new Map<string, Correction>();
  return (views) => {
    for (const view of views) seen.set(view.id, correctionOf(view));
    return views.map((view) => {
      const correction = seen.get(view.id)!;
      return {
        id: view.id,
        revision: view.revision,
        gesture: view.gesture,
        correction,
        takenBack: correction.kind === 'undo' ? (seen.get(correction.of) ?? null) : null,
        made: view.madeTrack,
        by: view.by,
        at: view.createdAt,
        inForce: view.inForce,
      };
    });
  };
}

/** The API behind the editor of one analysis. */
export function correctionsApi(
  analysisId: string,
  read: (views: readonly CorrectionView[]) => StoredCorrection[],
): CorrectionsApi {
  const path = `${analysisPath(analysisId)}/corrections`;
  return {
    async append(gesture, corrections, known) {
      const answer = await api<CorrectionsStored>(path, {
        method: 'POST',
        body: { corrections },
        revision: known,
        idempotencyKey: gesture.id,
      });
      // Someone else's may have been stored by the time of the answer: only our own are known here yet.
      const revision = answer.items[answer.items.length - 1].revision;
      return { revision, nextNumber: answer.nextTrack, corrections: read(answer.items) };
    },
    async since(revision) {
      const items: CorrectionView[] = [];
      let cursor: string | null = null;
      for (;;) {
        const query = new URLSearchParams({ limit: String(PAGE), after: String(revision), sort: 'revision' });
        if (cursor !== null) query.set('cursor', cursor);
        const page: CorrectionList = await api<CorrectionList>(`${path}?${query}`);
        items.push(...page.items);
        cursor = page.nextCursor;
        if (cursor !== null) continue;
        return { revision: page.revision, nextNumber: page.nextTrack, corrections: read(items) };
      }
    },
    async marks() {
      const { revision, items } = await api<MarksView>(`${analysisPath(analysisId)}/marks`);
      return {
        revision,
        marks: items.map(({ id, gesture, by, ...mark }) => ({ id, gesture, by, mark: markOf(mark) })),
      };
    },
    async closedBy() {
      return signedBy(await api<AnalysisView>(analysisPath(analysisId)));
    },
  };
}

const markOf = ({
  kind,
  frame,
  points,
}: Pick<MarksView['items'][number], 'kind' | 'frame' | 'points'>): Mark =>
  kind === 'mark-line' ? { kind, frame, points: points ?? [] } : { kind, frame };

/** Who has signed an analysis off; null while it is open. */
export function signedBy({ signedOff }: Pick<AnalysisView, 'signedOff'>): string | null {
  return signedOff ? (signedOff.by?.name ?? 'A principal investigator') : null;
}

/** The detector's fit near a place of a frame; null where it finds no tracer. */
export async function refinePoint(
  analysisId: string,
  frame: number,
  { x, y }: Point,
): Promise<RefinedPoint | null> {
  try {
    const answer = await api<RefinedView>(`${analysisPath(analysisId)}/refine-point`, {
      method: 'POST',
      body: { frame, x_px: x, y_px: y },
    });
    const { x_px, y_px, sx_px, sy_px, brightness, found } = answer;
    return { x: x_px, y: y_px, sx: sx_px, sy: sy_px, brightness, faint: found === 'fit' };
  } catch (error) {
    if (error instanceof ApiError && (error.status === 404 || error.status === 422)) return null;
    throw error;
  }
}

/** A track point by point as it is stored; null where there is none of that number now. */
export async function trackPoints(
  analysisId: string,
  track: number,
  signal?: AbortSignal,
): Promise<TrackPointsView['tracks'][number] | null> {
  const path = `${analysisPath(analysisId)}/track-points?tracks=${track}`;
  const { tracks } = await api<TrackPointsView>(path, signal ? { signal } : {});
  return tracks.find((item) => item.track === track) ?? null;
}

/** Says that this person is here. @returns who else is */
export async function sayHere(analysisId: string, userId: string, frame: number): Promise<PersonHere[]> {
  const { items } = await api<{ items: PresenceView[] }>(`${analysisPath(analysisId)}/presence`, {
    method: 'POST',
    body: { place: 'editor', frame },
  });
  return items
    .filter(({ person }) => person.id !== userId)
    .map(({ person, frame: at, place }) => ({
      id: person.id,
      name: person.name,
      frame: place === 'editor' ? at : null,
    }));
}
