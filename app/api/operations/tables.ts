import { attachment } from '@/app/api/content-disposition';
import { LabError } from '@/lib/errors';
import { estimatesJson } from '@/lib/tables/estimates-json';
import { reconnectionsCsv } from '@/lib/tables/reconnections-csv';
import { streamTracksCsv, streamVelocitiesCsv, withSegments } from '@/lib/tables/stream-tables';
import { velocityPdfCsv } from '@/lib/tables/velocity-pdf-csv';
import { readOrder, readReconnections } from '@/models/queries/analysis-outcome';
import { readSegments } from '@/models/queries/read-segments';
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

/** Tracks with the state of every stretch. */
async function statedTracks({ labId, analysisId }: TableRequest, revision: number) {
  const segments = await readSegments(labId, analysisId, revision);
  return withSegments(streamTracks(labId, analysisId, revision), segments);
}

export async function tracksTable(request: TableRequest): Promise<Pieces> {
  const revision = await revisionFor(request);
  const { conditions } = await orderOf(request);
  return streamTracksCsv(await statedTracks(request, revision), conditions);
}

export async function velocitiesTable(request: TableRequest): Promise<Pieces> {
  const revision = await revisionFor(request);
  const { conditions, recipe } = await orderOf(request);
  return streamVelocitiesCsv(await statedTracks(request, revision), recipe.lagsFrames, conditions);
}

const measuresFor = ({ labId, analysisId, corrections }: TableRequest) =>
  measuresOf(labId, analysisId, corrections === 'none' ? RAW_REVISION : undefined);

export async function velocityPdfTable(request: TableRequest): Promise<Pieces> {
  return velocityPdfCsv((await measuresFor(request)).pdfs);
}

export async function reconnectionsTable(request: TableRequest): Promise<Pieces> {
  await measuresFor(request);
  const raw = request.corrections === 'none';
  const { rows, verdicts } = await readReconnections(request.labId, request.analysisId, { raw });
  return reconnectionsCsv(rows, (event) => verdicts.get(event) ?? '');
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
