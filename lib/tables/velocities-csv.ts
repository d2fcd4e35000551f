import { trackVelocities } from '@/tracking/velocities';
import { csvChunks } from './csv-chunks';
import { significant } from './number-text';
import { stateAt, tablePieces, type TableScale, type TableTrack } from './track-rows';

export const VELOCITIES_COLUMNS = 'track,frame,t_s,lag_frames,vx_m_s,vy_m_s,svx_m_s,svy_m_s,population';

/**
 * Rows of `velocities.csv` for one track, lag by lag. `frame` and `t_s` are the start of the
 * interval whose mean velocity the row gives; it ends `lag_frames` later. Both ends are measured, and
 * no interval reaches across a place where a population given by a person begins or ends. The
 * population is that of the start.
 */
export function* velocityCsvRows(
  track: TableTrack,
  lagsFrames: readonly number[],
  scale: TableScale,
): Generator<string> {
  const pieces = tablePieces(track);
  for (const lagFrames of lagsFrames) {
    for (const piece of pieces) yield* rowsAtLag(piece, lagFrames, scale);
  }
}

function* rowsAtLag(piece: TableTrack, lagFrames: number, scale: TableScale): Generator<string> {
  const v = trackVelocities(piece, lagFrames, scale);
  for (let i = 0; i < v.frame.length; i++) {
    yield [
      piece.track,
      v.frame[i],
      significant(v.frame[i] * scale.frameInterval_s, 10),
      lagFrames,
      significant(v.vxMS[i], 7),
      significant(v.vyMS[i], 7),
      significant(v.svxMS[i], 5),
      significant(v.svyMS[i], 5),
      stateAt(piece, v.frame[i]).population,
    ].join(',');
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
