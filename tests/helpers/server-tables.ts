import { estimatesJson } from '@/lib/tables/estimates-json';
import { reconnectionsCsv } from '@/lib/tables/reconnections-csv';
import { streamTracksCsv, streamVelocitiesCsv } from '@/lib/tables/stream-tables';
import { velocityPdfCsv } from '@/lib/tables/velocity-pdf-csv';
import type { Analysis } from '@/models/analysis';
import { readMeasures, readReconnections } from '@/models/queries/analysis-outcome';
import { streamTracks } from '@/models/queries/read-tracks';

async function whole(pieces: AsyncIterable<string> | Iterable<string>): Promise<string> {
  let text = '';
  for await (const piece of pieces) text += piece;
  return text;
}

/** The five published tables of a finished analysis, as the server gives them for `corrections=none`. */
export async function serverTables(analysis: Analysis): Promise<Record<string, string>> {
  const { id, labId, conditions, recipe } = analysis;
  const measures = await readMeasures(labId, id, 0);
  if (!measures || !recipe) throw new Error('The analysis is not done.');
  return {
    'tracks.csv': await whole(streamTracksCsv(streamTracks(labId, id, 0), conditions)),
    'velocities.csv': await whole(
      streamVelocitiesCsv(streamTracks(labId, id, 0), recipe.lagsFrames, conditions),
    ),
    'velocity-pdf.csv': await whole(velocityPdfCsv(measures.pdfs)),
    'reconnections.csv': await whole(reconnectionsCsv((await readReconnections(labId, id)).rows)),
    'estimates.json': estimatesJson(measures.estimates),
  };
}
