import type { TrackPointsView } from '@/lib/views/correction-view';
import { correctionHead } from '@/models/queries/list-corrections';
import { readEditedTracks } from '@/models/queries/edited-tracks';
import { assertTracks } from '@/models/queries/read-results';
import { givenStretches } from '@/tracking/corrections/pieces';

const known = (values: Float32Array): (number | null)[] =>
  Array.from(values, (value) => (Number.isFinite(value) ? value : null));

/** Tracks of some numbers point by point; numbers that no track has now are left out. @throws LabError NOT_FOUND, NOT_COMPUTED */
export async function trackPoints(
  labId: string,
  analysisId: string,
  numbers: readonly number[],
): Promise<TrackPointsView> {
  await assertTracks(labId, analysisId);
  const head = await correctionHead(labId, analysisId);
  const tracks = await readEditedTracks(analysisId, head.revision, numbers);
  return {
    ...head,
    tracks: Array.from(tracks.values(), (track) => ({
      track: track.track,
      frame: Array.from(track.frame),
      x_px: Array.from(track.xPx),
      y_px: Array.from(track.yPx),
      sx_px: known(track.sxPx),
      sy_px: known(track.syPx),
      brightness: known(track.brightness),
      flags: Array.from(track.flags),
      given: givenStretches(track),
    })),
  };
}
