import { once } from 'node:events';
import { createWriteStream } from 'node:fs';
import { mkdir, rename } from 'node:fs/promises';
import { join } from 'node:path';
import { estimatesJson } from '@/lib/tables/estimates-json';
import { reconnectionsCsv } from '@/lib/tables/reconnections-csv';
import { tableTracks } from '@/lib/tables/track-rows';
import { tracksCsv } from '@/lib/tables/tracks-csv';
import { velocitiesCsv } from '@/lib/tables/velocities-csv';
import { velocityPdfCsv } from '@/lib/tables/velocity-pdf-csv';
import type { Conditions } from '@/tracking/types';
import type { LocalAnalysis } from './analyse-stack';

/** Writes the five published tables of an analysis; each appears only once it is whole. */
export async function writeTables(
  dir: string,
  { tracks, measures, recipe }: LocalAnalysis,
  conditions: Conditions,
): Promise<void> {
  await mkdir(dir, { recursive: true });
  const rows = () => tableTracks(tracks, measures.tracks, measures.details.segments);
  await writePieces(join(dir, 'tracks.csv'), tracksCsv(rows(), conditions));
  await writePieces(join(dir, 'velocities.csv'), velocitiesCsv(rows(), recipe.lagsFrames, conditions));
  await writePieces(join(dir, 'velocity-pdf.csv'), velocityPdfCsv(measures.pdfs));
  await writePieces(join(dir, 'reconnections.csv'), reconnectionsCsv(measures.candidates));
  await writePieces(join(dir, 'estimates.json'), [estimatesJson(measures.estimates)]);
}

/** Writes text in pieces under another name first, so that nobody finds half a file. */
export async function writePieces(path: string, pieces: Iterable<string>): Promise<void> {
  const part = `${path}.part`;
  const out = createWriteStream(part);
  for (const piece of pieces) if (!out.write(piece)) await once(out, 'drain');
  out.end();
  await once(out, 'finish');
  await rename(part, path);
}
