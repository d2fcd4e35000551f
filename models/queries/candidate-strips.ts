import type { ImageQuality } from '@/lib/recording-facts';
import type { Film } from '@/lib/review/film';
import type { FilmPathView } from '@/lib/views/review-view';
import { candidateOnFilm } from './candidate-detail';
import { selectRow, selectRows } from './select';

/** What all strips of an analysis share. */
export interface StripSource {
  recordingId: string;
  tracksRevision: number;
  contrast: { low: number; high: number };
  pixelSizeM: number;
  frameIntervalS: number;
  candidateIds: string[];
}

/** @returns null where there is nothing to draw: the analysis is not done, or its recording not ready. */
export async function stripSourceOf(labId: string, analysisId: string): Promise<StripSource | null> {
  const row = await selectRow<{
    recording_id: string;
    tracks_revision: number;
    image_quality: ImageQuality | null;
    pixel_size_m: number;
    frame_interval_s: number;
  }>(
    `SELECT a.recording_id, a.tracks_revision, g.image_quality,
       (a.conditions->>'pixelSize_m')::float8 AS pixel_size_m,
       (a.conditions->>'frameInterval_s')::float8 AS frame_interval_s
     FROM analyses a JOIN recordings g ON g.id = a.recording_id
     WHERE a.lab_id = $1 AND a.id = $2 AND a.state = 'done' AND g.state = 'ready' AND g.deleted_at IS NULL`,
    [labId, analysisId],
  );
  if (!row) return null;
  const candidates = await selectRows<{ id: string }>(
    'SELECT id FROM candidates WHERE lab_id = $1 AND analysis_id = $2 AND ended_revision IS NULL ORDER BY event',
    [labId, analysisId],
  );
  return {
    recordingId: row.recording_id,
    tracksRevision: row.tracks_revision,
    contrast: { low: row.image_quality?.low ?? 0, high: row.image_quality?.high ?? 65_535 },
    pixelSizeM: row.pixel_size_m,
    frameIntervalS: row.frame_interval_s,
    candidateIds: candidates.map(({ id }) => id),
  };
}

export interface StripCandidate {
  id: string;
  film: Film;
  paths: FilmPathView[];
}

/** A strip shows what was measured and nothing of what people said. */
const NOBODY = { userId: '00000000-0000-0000-0000-000000000000', seesOutcomes: false };

/** The film and both tracks of each of these candidates. */
export async function candidatesForStrips(labId: string, ids: readonly string[]): Promise<StripCandidate[]> {
  const list: StripCandidate[] = [];
  for (const id of ids) {
    const { film, paths } = await candidateOnFilm(labId, id, NOBODY);
    list.push({ id, film, paths });
  }
  return list;
}
