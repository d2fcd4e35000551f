import { LINE_END } from './csv-chunks';
import type { TrackSegment } from '@/tracking/populations/pieces';
import { segmentsByTrack, type TableScale, type TableTrack } from './track-rows';
import { trackCsvRows, TRACKS_COLUMNS } from './tracks-csv';
import { velocityCsvRows, VELOCITIES_COLUMNS } from './velocities-csv';

/** Pieces of about this many characters are handed on. */
const PIECE_CHARACTERS = 1 << 16;

async function* streamRows(
  columns: string,
  tracks: AsyncIterable<TableTrack>,
  rowsOf: (track: TableTrack) => Iterable<string>,
): AsyncGenerator<string> {
  let piece = columns + LINE_END;
  for await (const track of tracks) {
    for (const row of rowsOf(track)) {
      piece += row + LINE_END;
      if (piece.length < PIECE_CHARACTERS) continue;
      yield piece;
      piece = '';
    }
  }
  if (piece !== '') yield piece;
}

/** Tracks that come one by one from a store, with the stretches in which they change their state. */
export async function* withSegments(
  tracks: AsyncIterable<TableTrack>,
  segments: readonly TrackSegment[],
): AsyncGenerator<TableTrack> {
  const byTrack = segmentsByTrack(segments);
  for await (const track of tracks) {
    const own = byTrack.get(track.track);
    yield own ? { ...track, segments: own } : track;
  }
}

/** `tracks.csv` of tracks that come one by one from a store: the same bytes as `tracksCsv`. */
export function streamTracksCsv(
  tracks: AsyncIterable<TableTrack>,
  scale: TableScale,
): AsyncGenerator<string> {
  return streamRows(TRACKS_COLUMNS, tracks, (track) => trackCsvRows(track, scale));
}

/** `velocities.csv` of tracks that come one by one from a store: the same bytes as `velocitiesCsv`. */
export function streamVelocitiesCsv(
  tracks: AsyncIterable<TableTrack>,
  lagsFrames: readonly number[],
  scale: TableScale,
): AsyncGenerator<string> {
  return streamRows(VELOCITIES_COLUMNS, tracks, (track) => velocityCsvRows(track, lagsFrames, scale));
}
