import { attachment } from '@/app/api/content-disposition';
import { LabError } from '@/lib/errors';
import { LINE_END } from '@/lib/tables/csv-chunks';
import { estimatesJson } from '@/lib/tables/estimates-json';
import { reconnectionsCsv } from '@/lib/tables/reconnections-csv';
import type { TableTrack } from '@/lib/tables/track-rows';
import { TRACKS_COLUMNS, trackCsvRows } from '@/lib/tables/tracks-csv';
import { VELOCITIES_COLUMNS, velocityCsvRows } from '@/lib/tables/velocities-csv';
import { velocityPdfCsv } from '@/lib/tables/velocity-pdf-csv';
import { readOrder, readReconnections } from '@/models/queries/analysis-outcome';
import { streamTracks } from '@/models/queries/read-tracks';
import { assertTracks, measuresOf } from '@/models/queries/read-results';

export interface TableRequest {
  labId: string;
  analysisId: string;
  /** `none`: as the machine made the tracks. */
  corrections: 'none' | 'all';
}

/** Revision of the tracks as linking made them. */
const RAW_REVISION = 0;

type Pieces = AsyncIterable<string> | Iterable<string>;

const revisionFor = async ({ labId, analysisId, corrections }: TableRequest): Promise<number> => {
  const current = await assertTracks(labId, analysisId);
  return corrections === 'none' ? RAW_REVISION : current;
};

async function orderOf({ labId, analysisId }: TableRequest) {
  const order = await readOrder(labId, analysisId);
  if (!order?.recipe) throw new LabError('NOT_COMPUTED', 'The analysis has not measured its images yet.');
  return { conditions: order.conditions, recipe: order.recipe };
}

/** Pieces are handed on at about this many characters. */
const PIECE_CHARACTERS = 1 << 16;

/** Header and rows of all tracks, joined into larger pieces; a few tracks at most are in memory. */
async function* piecesOf(
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

export async function tracksTable(request: TableRequest): Promise<Pieces> {
  const revision = await revisionFor(request);
  const { conditions } = await orderOf(request);
  return piecesOf(TRACKS_COLUMNS, streamTracks(request.labId, request.analysisId, revision), (track) =>
    trackCsvRows(track, conditions),
  );
}

export async function velocitiesTable(request: TableRequest): Promise<Pieces> {
  const revision = await revisionFor(request);
  const { conditions, recipe } = await orderOf(request);
  return piecesOf(VELOCITIES_COLUMNS, streamTracks(request.labId, request.analysisId, revision), (track) =>
    velocityCsvRows(track, recipe.lagsFrames, conditions),
  );
}

const measuresFor = ({ labId, analysisId, corrections }: TableRequest) =>
  measuresOf(labId, analysisId, corrections === 'none' ? RAW_REVISION : undefined);

export async function velocityPdfTable(request: TableRequest): Promise<Pieces> {
  return velocityPdfCsv((await measuresFor(request)).pdfs);
}

export async function reconnectionsTable(request: TableRequest): Promise<Pieces> {
  await measuresFor(request);
  return reconnectionsCsv(await readReconnections(request.labId, request.analysisId));
}

export async function estimatesTable(request: TableRequest): Promise<Pieces> {
  return [estimatesJson((await measuresFor(request)).estimates)];
}

/** A download that is made while it is read; a reader who leaves ends the making. */
export function download(pieces: Pieces, name: string, type: string, requestId: string): Response {
  const encoder = new TextEncoder();
  const iterator =
    Symbol.asyncIterator in pieces
      ? pieces[Symbol.asyncIterator]()
      : (pieces as Iterable<string>)[Symbol.iterator]();
  const body = new ReadableStream<Uint8Array>({
    async pull(controller) {
      const next = await iterator.next();
      if (next.done) controller.close();
      else controller.enqueue(encoder.encode(next.value));
    },
    async cancel() {
      await iterator.return?.();
    },
  });
  return new Response(body, {
    headers: {
      'Content-Type': type,
      'Content-Disposition': attachment(name),
      'Cache-Control': 'private, no-store',
      'X-Request-Id': requestId,
    },
  });
}
