import type { Transaction } from 'sequelize';
import type { TrackMeasures } from '@/tracking/flow-measures';
import { trackSlice, type TrackSlice } from '@/tracking/track-slice';
import { POINT_BRIDGED, type Tracks } from '@/tracking/types';
import { getSequelize } from '../database';
import { copyRows } from './copy-rows';
import { BLOCK_FRAMES, blockOf, encodePoints } from './point-blob';
import { idBytes } from './id-bytes';

const TRACK_COLUMNS = ['analysis_id', 'number', 'born_revision', 'first_frame', 'last_frame', 'points', 'bridged', 'mean_x_px', 'mean_y_px', 'mean_brightness', 'flags']; // prettier-ignore
const POINT_COLUMNS = ['analysis_id', 'block', 'number', 'born_revision', 'first_frame', 'points'];

/** Tracks in the order of their numbers, from the first one on each time they are asked for. */
export type TrackSlices = () => Iterable<TrackSlice> | AsyncIterable<TrackSlice>;

/** Stores the tracks that linking made, as revision 0. */
export function writeTracks(analysisId: string, tracks: Tracks, transaction: Transaction): Promise<void> {
  return writeTrackSlices(analysisId, () => slices(tracks), 0, transaction);
}

/** Stores tracks that are valid from a revision on, by COPY. */
export async function writeTrackSlices(
  analysisId: string,
  tracks: TrackSlices,
  bornRevision: number,
  transaction: Transaction,
): Promise<void> {
  const id = idBytes(analysisId);
  await copyRows(
    'tracks',
    TRACK_COLUMNS,
    tracks(),
    (rows, slice) => {
      const mean = meansOf(slice);
      const last = slice.frame.length - 1;
      rows.row(TRACK_COLUMNS.length).bytes(id).int4(slice.track).int4(bornRevision);
      rows.int4(slice.frame[0]).int4(slice.frame[last]).int4(slice.frame.length).int4(mean.bridged);
      rows.real(mean.xPx).real(mean.yPx).real(mean.brightness).int2(mean.flags);
    },
    transaction,
  );
  await copyRows(
    'track_points',
    POINT_COLUMNS,
    blocks(tracks()),
    (rows, { slice, from, to }) => {
      const firstFrame = slice.frame[from];
      rows.row(POINT_COLUMNS.length).bytes(id).int4(blockOf(firstFrame)).int4(slice.track);
      rows.int4(bornRevision);
      rows.int4(firstFrame).bytes(encodePoints(slice, from, to));
    },
    transaction,
  );
}

function* slices(tracks: Tracks): Generator<TrackSlice> {
  for (let i = 0; i < tracks.count; i++) yield trackSlice(tracks, i);
}

async function* blocks(
  tracks: ReturnType<TrackSlices>,
): AsyncGenerator<{ slice: TrackSlice; from: number; to: number }> {
  for await (const slice of tracks) {
    let from = 0;
    while (from < slice.frame.length) {
      const end = (blockOf(slice.frame[from]) + 1) * BLOCK_FRAMES - slice.frame[from];
      const to = Math.min(slice.frame.length, from + end);
      yield { slice, from, to };
      from = to;
    }
  }
}

// Bridged points are interpolated: they have no brightness and say nothing of their own. Nor has a point set by eye.
function meansOf({ xPx, yPx, brightness, flags }: TrackSlice) {
  const sum = { x: 0, y: 0, brightness: 0, bright: 0, flags: 0, bridged: 0 };
  for (let i = 0; i < flags.length; i++) {
    sum.x += xPx[i];
    sum.y += yPx[i];
    sum.flags |= flags[i];
    if (flags[i] & POINT_BRIDGED) sum.bridged++;
    else if (!Number.isNaN(brightness[i])) {
      sum.brightness += brightness[i];
      sum.bright++;
    }
  }
  return {
    xPx: sum.x / flags.length,
    yPx: sum.y / flags.length,
    brightness: sum.bright > 0 ? sum.brightness / sum.bright : 0,
    flags: sum.flags,
    bridged: sum.bridged,
  };
}

/** Tracks per statement: large enough to be quick, small enough to be no burden. */
const PIECE = 20_000;

/** Adds what was measured of each track to the tracks of revision 0; NaN becomes unknown. */
export async function writeTrackMeasures(
  analysisId: string,
  measures: TrackMeasures,
  transaction: Transaction,
): Promise<void> {
  const known = (values: Float32Array) => Array.from(values, (value) => (Number.isNaN(value) ? null : value));
  const count = measures.population.length;
  for (let from = 0; from < count; from += PIECE) {
    const to = Math.min(count, from + PIECE);
    await getSequelize().query(
      `UPDATE tracks SET population = m.population, p_trapped = m.p_trapped, mean_speed_m_s = m.speed
       FROM (SELECT $2::int + (row_number() OVER ())::int - 1 AS number, population, p_trapped, speed
             FROM unnest($3::smallint[], $4::real[], $5::real[]) AS u (population, p_trapped, speed)) m
       WHERE tracks.analysis_id = $1 AND tracks.number = m.number AND tracks.born_revision = 0`,
      {
        bind: [
          analysisId,
          from,
          Array.from(measures.population.subarray(from, to)),
          known(measures.pTrapped.subarray(from, to)),
          known(measures.meanSpeedMS.subarray(from, to)),
        ],
        transaction,
      },
    );
  }
}
