import { POINT_BRIDGED } from '@/tracking/types';
import { csvChunks } from './csv-chunks';
import { decimals, significant } from './number-text';
import { stateAt, type TableScale, type TableTrack } from './track-rows';

export const TRACKS_COLUMNS = 'track,frame,t_s,x_px,y_px,x_m,y_m,sx_px,sy_px,brightness,population,p_trapped';

/**
 * Rows of `tracks.csv` for one track, a row per frame. In a frame where the tracer was missed the
 * position is interpolated: such a row has no standard errors and no brightness. Metres are those
 * of the pixels as written.
 */
export function* trackCsvRows(track: TableTrack, scale: TableScale): Generator<string> {
  for (let i = 0; i < track.frame.length; i++) {
    const { population, pTrapped } = stateAt(track, track.frame[i]);
    const measured = (track.flags[i] & POINT_BRIDGED) === 0;
    const x = decimals(track.xPx[i], 4);
    const y = decimals(track.yPx[i], 4);
    yield [
      track.track,
      track.frame[i],
      significant(track.frame[i] * scale.frameInterval_s, 10),
      x,
      y,
      significant(Number(x) * scale.pixelSize_m, 10),
      significant(Number(y) * scale.pixelSize_m, 10),
      measured ? decimals(track.sxPx[i], 4) : '',
      measured ? decimals(track.syPx[i], 4) : '',
      measured ? significant(track.brightness[i], 6) : '',
      population,
      decimals(pTrapped, 4),
    ].join(',');
  }
}

/** `tracks.csv` in pieces; tracks come one by one, so that none but the current is in memory. */
export function tracksCsv(tracks: Iterable<TableTrack>, scale: TableScale): Generator<string> {
  function* rows() {
    for (const track of tracks) yield* trackCsvRows(track, scale);
  }
  return csvChunks(TRACKS_COLUMNS, rows());
}
