import { trackVelocities } from '@/tracking/velocities';
import { csvChunks } from './csv-chunks';
import { significant } from './number-text';
import { stateAt, type TableScale, type TableTrack } from './track-rows';

export const VELOCITIES_COLUMNS = 'track,frame,t_s,lag_frames,vx_m_s,vy_m_s,svx_m_s,svy_m_s,population';

/**
 * Rows of `velocities.csv` for one track, lag by lag. `frame` and `t_s` are the start of the
 * interval whose mean velocity the row gives; it ends `lag_frames` later. Both ends are measured. The
 * population is that of the start.
 */
export function* velocityCsvRows(
  track: TableTrack,
  lagsFrames: readonly number[],
  scale: TableScale,
): Generator<string> {
  for (const lagFrames of lagsFrames) {
    const v = trackVelocities(track, lagFrames, scale);
    for (let i = 0; i < v.frame.length; i++) {
      yield [
        track.track,
        v.frame[i],
        significant(v.frame[i] * scale.frameInterval_s, 10),
        lagFrames,
        significant(v.vxMS[i], 7),
        significant(v.vyMS[i], 7),
        significant(v.svxMS[i], 5),
        significant(v.svyMS[i], 5),
        stateAt(track, v.frame[i]).population,
      ].join(',');
    }
  }
}

/** `velocities.csv` in pieces, track by track. */
export function velocitiesCsv(
  tracks: Iterable<TableTrack>,
  lagsFrames: readonly number[],
  scale: TableScale,
): Generator<string> {
  function* rows() {
    for (const track of tracks) yield* velocityCsvRows(track, lagsFrames, scale);
  }
  return csvChunks(VELOCITIES_COLUMNS, rows());
}
