import { QueryTypes, type Transaction } from 'sequelize';
import { getSequelize } from '../database';
import { queryArrays, withRawClient } from '../raw-client';

export interface SpotChunk {
  chunk: number;
  firstFrame: number;
  frames: number;
  spotCount: number;
  spotsPerFrame: number[];
  /** Encoded by tracking/spots. */
  spots: Uint8Array;
}

/** Stores the spots of one chunk; a later try of the same chunk replaces them. @returns chunks now stored. */
export async function saveSpotChunk(
  analysisId: string,
  { chunk, firstFrame, frames, spotCount, spotsPerFrame, spots }: SpotChunk,
  transaction: Transaction,
): Promise<number> {
  const sequelize = getSequelize();
  await sequelize.query(
    `INSERT INTO spot_chunks (analysis_id, chunk, first_frame, frames, spot_count, spots_per_frame, spots)
     VALUES ($1, $2, $3, $4, $5, $6, $7)
     ON CONFLICT (analysis_id, chunk) DO UPDATE SET first_frame = excluded.first_frame, frames = excluded.frames,
       spot_count = excluded.spot_count, spots_per_frame = excluded.spots_per_frame, spots = excluded.spots`,
    {
      bind: [analysisId, chunk, firstFrame, frames, spotCount, spotsPerFrame, Buffer.from(spots)],
      transaction,
    },
  );
  const rows = await sequelize.query<{ stored: number }>(
    'SELECT count(*)::int AS stored FROM spot_chunks WHERE analysis_id = $1',
    { bind: [analysisId], type: QueryTypes.SELECT, transaction },
  );
  return rows[0].stored;
}

/** The packed spots of the chunks in order, one chunk at a time. */
export async function* streamSpotChunks(labId: string, analysisId: string): AsyncGenerator<Uint8Array> {
  for (let after = -1; ;) {
    const [row] = await withRawClient((client) =>
      queryArrays<[number, Buffer]>(
        client,
        `SELECT c.chunk, c.spots FROM spot_chunks c JOIN analyses a ON a.id = c.analysis_id
         WHERE a.lab_id = $1 AND c.analysis_id = $2 AND c.chunk > $3 ORDER BY c.chunk LIMIT 1`,
        [labId, analysisId, after],
      ),
    );
    if (!row) return;
    yield row[1];
    after = row[0];
  }
}

/** The packed spots of all chunks in order. */
export async function readSpotChunks(labId: string, analysisId: string): Promise<Uint8Array[]> {
  const chunks: Uint8Array[] = [];
  for await (const spots of streamSpotChunks(labId, analysisId)) chunks.push(spots);
  return chunks;
}

/** Spots found in every frame so far, chunk after chunk. */
export async function readSpotsPerFrame(analysisId: string, transaction?: Transaction): Promise<number[]> {
  const rows = await getSequelize().query<{ counts: number[] }>(
    'SELECT spots_per_frame AS counts FROM spot_chunks WHERE analysis_id = $1 ORDER BY chunk',
    { bind: [analysisId], type: QueryTypes.SELECT, transaction },
  );
  return rows.flatMap((row) => row.counts);
}
