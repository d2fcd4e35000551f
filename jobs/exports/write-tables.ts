import type { TableDefinition } from '@/lib/exports/column';
import type { ExportFormat } from '@/lib/exports/export-facts';
import type { PlannedAnalysis } from '@/lib/exports/plan';
import * as tables from '@/lib/exports/table-definitions';
import { withSegments } from '@/lib/tables/stream-tables';
import { streamTracks } from '@/models/queries/read-tracks';
import { csvSink } from './csv-sink';
import { hdf5Sink } from './hdf5-sink';
import { npzSink } from './npz-sink';
import { parquetSink } from './parquet-sink';
import * as detail from './detail-tables';
import * as small from './small-tables';
import { trackPieces, velocityPieces, type TablePiece } from './table-pieces';
import type { TableSink } from './table-sink';

const SINKS: Record<ExportFormat, (place: { folder: string; table: TableDefinition }) => Promise<TableSink>> = { csv: csvSink, hdf5: hdf5Sink, parquet: parquetSink, npz: npzSink }; // prettier-ignore

/** The rows of one table of an analysis, read piece by piece. */
export function piecesOf(
  labId: string,
  analysis: PlannedAnalysis,
  table: TableDefinition,
  withCsv: boolean,
): AsyncIterable<TablePiece> | Iterable<TablePiece> {
  const { measures, conditions } = analysis;
  const tracks = () =>
    withSegments(streamTracks(labId, analysis.id, analysis.tracksRevision), measures.details?.segments ?? []);
  switch (table) {
    case tables.TRACKS:
      return trackPieces(tracks(), conditions, withCsv);
    case tables.VELOCITIES:
      return velocityPieces(tracks(), analysis.recipe.lagsFrames, conditions, withCsv);
    case tables.VELOCITY_PDF:
      return [small.velocityPdfPiece(table, measures.pdfs)];
    case tables.VELOCITY_KERNEL:
      return [small.velocityKernelPiece(table, measures.pdfs)];
    case tables.DISPLACEMENTS:
      return [small.displacementsPiece(table, measures.motion)];
    case tables.AUTOCORRELATIONS:
      return [small.autocorrelationsPiece(table, measures.motion)];
    case tables.RECONNECTIONS:
      return [small.reconnectionsPiece(table, analysis.candidates, analysis.verdicts)];
    case tables.OVER_TIME:
      return [detail.overTimePiece(table, measures.details)];
    case tables.PROFILES:
      return [detail.profilesPiece(table, measures.details)];
    case tables.ACCELERATIONS:
      return [detail.accelerationsPiece(table, measures.details)];
    case tables.TAILS:
      return [detail.tailsPiece(table, measures.motion)];
    case tables.CHANGES_OF_STATE:
      return [detail.changesPiece(table, measures.details)];
    default:
      return [small.estimatesPiece(table, measures.estimates)];
  }
}

/**
 * Writes one table in every format at once, so that its rows are read only once.
 * @returns names of the files
 */
export async function writeTable(
  folder: string,
  table: TableDefinition,
  pieces: AsyncIterable<TablePiece> | Iterable<TablePiece>,
  formats: readonly ExportFormat[],
  { signal, onRows }: { signal?: AbortSignal; onRows?: (rows: number) => void } = {},
): Promise<string[]> {
  const sinks: TableSink[] = [];
  try {
    for (const format of formats) sinks.push(await SINKS[format]({ folder, table }));
    for await (const piece of pieces) {
      for (const sink of sinks) {
        signal?.throwIfAborted();
        await sink.write(piece);
        // Signs of life and news of being stopped need a turn between pieces of computing.
        await new Promise((resolve) => setImmediate(resolve));
      }
      onRows?.(piece.batch.rows);
    }
    const names: string[] = [];
    for (const sink of sinks) names.push(...(await sink.finish()));
    return names;
  } catch (cause) {
    for (const sink of sinks) await sink.abandon().catch(() => undefined);
    throw cause;
  }
}
