import type { RowBatch } from '@/lib/exports/column';
import { TRACKS, VELOCITIES } from '@/lib/exports/table-definitions';
import { LINE_END } from '@/lib/tables/csv-chunks';
import { stateAt, tablePieces, type TableScale, type TableTrack } from '@/lib/tables/track-rows';
import { trackCsvRows, TRACKS_COLUMNS } from '@/lib/tables/tracks-csv';
import { velocityCsvRows, VELOCITIES_COLUMNS } from '@/lib/tables/velocities-csv';
import { POINT_BRIDGED, POPULATIONS } from '@/tracking/types';
import { trackVelocities } from '@/tracking/velocities';
import { BatchBuilder } from './batch-builder';
import { TextBuilder } from './text-builder';

/** The next rows of a table, as columns and, where asked for, as text of its CSV file (as bytes, in UTF-8). */
export interface TablePiece {
  batch: RowBatch;
  csv: string | Uint8Array;
}

/** Makes rows of one track; the CSV text comes from the very writer of the downloads. */
interface TrackTable {
  header: string;
  csvRows(track: TableTrack): Iterable<string>;
  /** Hands every row to `add`, which fills the columns at the place it is told. */
  fill(track: TableTrack, add: (put: (columns: BatchBuilder['columns'], at: number) => void) => void): void;
}

/** Code of a population by its name; -1 where it is not known. */
const codeOf = (population: string): number => (POPULATIONS as readonly string[]).indexOf(population);

async function* pieces(
  columns: ConstructorParameters<typeof BatchBuilder>[0],
  { header, csvRows, fill }: TrackTable,
  tracks: AsyncIterable<TableTrack>,
  withCsv: boolean,
): AsyncGenerator<TablePiece> {
  const builder = new BatchBuilder(columns);
  const ready: RowBatch[] = [];
  const csv = new TextBuilder();
  if (withCsv) csv.add(header + LINE_END);
  for await (const track of tracks) {
    if (withCsv) for (const row of csvRows(track)) csv.add(row + LINE_END);
    fill(track, (put) => {
      put(builder.columns, builder.rows);
      builder.rows++;
      // A long track may fill more than one batch; its arrays are used again, so they are copied.
      if (builder.full) ready.push(copied(builder.take()));
    });
    for (const batch of ready.splice(0)) {
      yield { batch, csv: csv.take() };
    }
  }
  yield { batch: builder.take(), csv: csv.take() };
}

const copied = ({ rows, columns }: RowBatch): RowBatch => ({
  rows,
  columns: columns.map((values) => values.slice() as typeof values),
});

/** Rows of `tracks`, from tracks that come one by one. */
export function trackPieces(
  tracks: AsyncIterable<TableTrack>,
  scale: TableScale,
  withCsv: boolean,
): AsyncGenerator<TablePiece> {
  const table: TrackTable = {
    header: TRACKS_COLUMNS,
    csvRows: (track) => trackCsvRows(track, scale),
    fill(track, add) {
      for (let i = 0; i < track.frame.length; i++) {
        const measured = (track.flags[i] & POINT_BRIDGED) === 0;
        const { population, pTrapped } = stateAt(track, track.frame[i]);
        add((columns, at) => {
          columns[0][at] = track.track;
          columns[1][at] = track.frame[i];
          columns[2][at] = track.frame[i] * scale.frameInterval_s;
          columns[3][at] = track.xPx[i];
          columns[4][at] = track.yPx[i];
          columns[5][at] = track.xPx[i] * scale.pixelSize_m;
          columns[6][at] = track.yPx[i] * scale.pixelSize_m;
          columns[7][at] = measured ? track.sxPx[i] : Number.NaN;
          columns[8][at] = measured ? track.syPx[i] : Number.NaN;
          columns[9][at] = measured ? track.brightness[i] : Number.NaN;
          columns[10][at] = codeOf(population);
          columns[11][at] = pTrapped;
        });
      }
    },
  };
  return pieces(TRACKS.columns, table, tracks, withCsv);
}

/** Rows of `velocities`, lag by lag within each track. */
export function velocityPieces(
  tracks: AsyncIterable<TableTrack>,
  lagsFrames: readonly number[],
  scale: TableScale,
  withCsv: boolean,
): AsyncGenerator<TablePiece> {
  const table: TrackTable = {
    header: VELOCITIES_COLUMNS,
    csvRows: (track) => velocityCsvRows(track, lagsFrames, scale),
    fill(track, add) {
      const parts = tablePieces(track);
      for (const lagFrames of lagsFrames) {
        for (const part of parts) {
          const v = trackVelocities(part, lagFrames, scale);
          for (let i = 0; i < v.frame.length; i++) {
            const { population } = stateAt(part, v.frame[i]);
            add((columns, at) => {
              columns[0][at] = track.track;
              columns[1][at] = v.frame[i];
              columns[2][at] = v.frame[i] * scale.frameInterval_s;
              columns[3][at] = lagFrames;
              columns[4][at] = v.vxMS[i];
              columns[5][at] = v.vyMS[i];
              columns[6][at] = v.svxMS[i];
              columns[7][at] = v.svyMS[i];
              columns[8][at] = codeOf(population);
            });
          }
        }
      }
    },
  };
  return pieces(VELOCITIES.columns, table, tracks, withCsv);
}
