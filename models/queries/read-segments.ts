import type { TrackSegment } from '@/tracking/populations/pieces';
import { selectRow } from './select';

/**
 * Stretches in which tracks are in different states, as measured last for a revision of the tracks or an
 * earlier one; empty where nothing was measured.
 */
export async function readSegments(
  labId: string,
  analysisId: string,
  tracksRevision: number,
): Promise<TrackSegment[]> {
  const row = await selectRow<{ segments: TrackSegment[] | null }>(
    `SELECT m.details -> 'segments' AS segments FROM analysis_measures m JOIN analyses a ON a.id = m.analysis_id
     WHERE a.lab_id = $1 AND m.analysis_id = $2 AND m.tracks_revision <= $3
     ORDER BY m.tracks_revision DESC LIMIT 1`,
    [labId, analysisId, tracksRevision],
  );
  return row?.segments ?? [];
}
